//! The program as its users meet it: statuses, messages, folders, streams.

#[cfg(test)]
mod cli {
    mod bench;
    mod disk;
    mod folders;
    mod kills;
    mod lock;
    mod signals;
    mod statuses;
    mod streams;
    mod surroundings;
    mod tools;
}
