//! Every problem code with its status and its meaning: the table behind `/problems` and the OpenAPI document.

use crate::catalogue::openapi::ProblemCode;

/// All codes, by status.
pub static CODES: &[ProblemCode] = &[
    code("parameter-value", 400, "A parameter's value is not of the expected kind or not in its range."),
    code("parameter-unknown", 400, "A parameter's name is not known here."),
    code("parameter-absent", 400, "A parameter that is needed was not sent."),
    code("give-unknown", 400, "The answer has no fact of the name that was asked for."),
    code("json", 400, "The body is not a JSON object."),
    code("json-value", 400, "A value in the JSON body is of a kind that no parameter takes."),
    code("ragged-range", 400, "The rows of a range are not equally long."),
    code("encoding", 400, "The body is not text in UTF-8."),
    code("body-broken", 400, "The body ended before it was complete, or its parts cannot be told apart."),
    code("reading", 400, "A reading is neither a number, a limit, one of the grades, nor blank."),
    code("grades-unordered", 400, "The readings are words whose order is not stated."),
    code("moments-count", 400, "There is not one moment for each reading."),
    code("moment-blank", 400, "A moment is blank while others are there."),
    code("moments-out-of-order", 400, "A moment lies before the one above it."),
    code("moments-repeated", 400, "The same moment stands twice."),
    code("blocks-count", 400, "There is not one block label for each reading."),
    code("several-columns", 400, "The readings came in several columns, and the test takes one."),
    code("p-value", 400, "A p-value in the list is not a number from 0 to 1."),
    code("upload-empty", 400, "No workbook was sent."),
    code("upload-several", 400, "Several files were sent where one is read."),
    code("origin", 403, "The request comes from a web page elsewhere."),
    code("path-unknown", 404, "There is nothing at this address."),
    code("method-unknown", 404, "There is no test of this name."),
    code("problem-unknown", 404, "There is no problem code of this name."),
    code("verb", 405, "The address does not take this HTTP method."),
    code("slow", 408, "The body took too long to arrive."),
    code("too-large", 413, "The body is larger than the limit."),
    code("too-many-readings", 413, "There are more readings than one request may hold."),
    code("media-type", 415, "The body is of a type that is not read here."),
    code("host", 421, "The request is meant for another host."),
    code("too-few-readings", 422, "There are too few readings to compute anything."),
    code("all-tied", 422, "The readings that are compared do not differ."),
    code("beyond-exact", 422, "The exact p was asked for beyond the size that it is computed for."),
    code("scale", 422, "The readings are of a kind that the test cannot use."),
    code("not-applicable", 422, "The test does not apply to these readings."),
    code("broken", 500, "Something went wrong on our side."),
    code("upload-not-stored", 500, "The workbook cannot be stored for working on it."),
    code("busy", 503, "All places for computing are taken."),
];

/// The row of a code.
pub fn find(code: &str) -> Option<&'static ProblemCode> {
    CODES.iter().find(|row| row.code == code)
}

const fn code(code: &'static str, status: u16, title: &'static str) -> ProblemCode {
    ProblemCode { code, status, title }
}
