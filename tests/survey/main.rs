//! Invented workbooks of several trades, each with the indicators that a person would mark in it written beside.

mod corpus;
mod forms;
mod helpers;
mod long_tables;
mod moments;
mod refusals;
mod remarks;
mod stated;
mod text_files;
mod trades;
