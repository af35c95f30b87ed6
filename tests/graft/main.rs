//! The graft: new sheets in, everything else untouched.

mod corpus;
mod donor;
mod hand_made;
