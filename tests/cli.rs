//! The program as its users meet it: statuses, messages, folders, streams.

mod cli {
    mod bench;
    mod folders;
    mod signals;
    mod statuses;
    mod streams;
    mod tools;
}
