//! A workbook received piece by piece into a folder of its own, never held in memory as a whole.

use std::fs::File;
use std::io::{Read, Write};
use std::path::{Path, PathBuf};

use actix_multipart::Multipart;
use actix_web::HttpRequest;
use actix_web::http::header::CONTENT_TYPE;
use actix_web::rt::time::timeout;
use actix_web::web::{self, Bytes, BytesMut, Payload};
use futures_util::{Stream, StreamExt};
use tempfile::TempDir;

use super::limit::Limits;
use super::{body, compute};
use crate::method::declaration::{Argument, Arguments};
use crate::problem::{Problem, ProblemKind};

/// A workbook in a folder that goes away with this.
pub struct Upload {
    folder: TempDir,
    /// Where the workbook is; its extension is that of `name`.
    pub path: PathBuf,
    /// The name that the client gave it, without any folder.
    pub name: String,
}

impl Upload {
    /// Gives the workbook the name that the client has for it. The file keeps its ending only, so that no name can lead
    /// out of the folder; without a known ending its first bytes decide.
    pub fn rename(&mut self, name: &str) -> Result<(), Problem> {
        let name = last_part(name);
        let extension = extension(name).unwrap_or_else(|| sniff(&self.path));
        let path = self.beside(&format!("workbook.{extension}"));
        std::fs::rename(&self.path, &path).map_err(|_| compute::broken())?;
        self.path = path;
        self.name = if name.is_empty() { format!("workbook.{extension}") } else { name.to_owned() };
        Ok(())
    }

    /// A path in the same folder.
    pub fn beside(&self, name: &str) -> PathBuf {
        self.folder.path().join(name)
    }
}

/// Extensions that a received file may keep.
const EXTENSIONS: [&str; 9] = ["xlsx", "xlsm", "xltx", "xltm", "xls", "xlsb", "ods", "csv", "tsv"];

/// Bytes that are collected before they are written.
const PIECE: usize = 256 << 10;

/// Bytes of a text field beside the workbook.
const TEXT_FIELD: usize = 64 << 10;

/// Receives a workbook, as the body itself or as the file of a form. Text fields of the form are added to the arguments.
pub async fn receive(
    request: &HttpRequest,
    payload: Payload,
    arguments: &mut Arguments,
    limits: &Limits,
) -> Result<Upload, Problem> {
    body::check_encoding(request)?;
    body::check_length(request, limits.upload)?;
    let folder = TempDir::with_prefix("risefall-").map_err(|_| compute::broken())?;
    let is_form = request.headers().get(CONTENT_TYPE).is_some_and(|kind| kind.as_bytes().starts_with(b"multipart/"));
    let receiving = async {
        let path = folder.path().join("received");
        match is_form {
            true => from_form(request, payload, &path, arguments, limits).await,
            false => store(payload, &path, limits.upload).await.map(|size| (size > 0).then(String::new)),
        }
    };
    let name = timeout(limits.upload_time, receiving).await.unwrap_or_else(|_| Err(body::slow(limits.upload_time)))?;
    let name = name.ok_or_else(empty)?;
    let path = folder.path().join("received");
    let mut upload = Upload { folder, path, name: String::new() };
    upload.rename(&name)?;
    Ok(upload)
}

/// The name of the first file of a form, once it is stored; `None` if there is no file or an empty one.
async fn from_form(
    request: &HttpRequest,
    payload: Payload,
    path: &Path,
    arguments: &mut Arguments,
    limits: &Limits,
) -> Result<Option<String>, Problem> {
    let mut form = Multipart::new(request.headers(), payload);
    let mut stored = None;
    while let Some(field) = form.next().await {
        let mut field = field.map_err(|error| body::broken_off(&error))?;
        let file = field.content_disposition().and_then(|disposition| disposition.get_filename()).map(str::to_owned);
        let name = field.name().unwrap_or_default().to_owned();
        match file {
            Some(file) if stored.is_none() => stored = (store(&mut field, path, limits.upload).await? > 0).then_some(file),
            Some(_) => return Err(several()),
            None => {
                let text = text(&mut field).await?;
                arguments.push(name, Argument::Text(text));
            }
        }
    }
    Ok(stored)
}

async fn text<E: std::fmt::Display>(field: &mut (impl Stream<Item = Result<Bytes, E>> + Unpin)) -> Result<String, Problem> {
    let mut text = BytesMut::new();
    while let Some(chunk) = field.next().await {
        text.extend_from_slice(&chunk.map_err(|error| body::broken_off(&error))?);
        if text.len() > TEXT_FIELD {
            return Err(body::too_large(TEXT_FIELD as u64));
        }
    }
    Ok(String::from_utf8_lossy(&text).trim().to_owned())
}

/// Writes a stream to a new file, piece by piece on a thread of its own, and tells its size.
async fn store<E: std::fmt::Display>(
    mut stream: impl Stream<Item = Result<Bytes, E>> + Unpin,
    path: &Path,
    most: u64,
) -> Result<u64, Problem> {
    let mut file = File::create_new(path).map_err(|_| compute::broken())?;
    let mut piece = BytesMut::with_capacity(PIECE);
    let mut size = 0;
    loop {
        let chunk = stream.next().await.transpose().map_err(|error| body::broken_off(&error))?;
        let ended = chunk.is_none();
        let chunk = chunk.unwrap_or_default();
        size += chunk.len() as u64;
        if size > most {
            return Err(body::too_large(most));
        }
        piece.extend_from_slice(&chunk);
        if piece.len() >= PIECE || ended {
            let full = std::mem::replace(&mut piece, BytesMut::with_capacity(if ended { 0 } else { PIECE }));
            let written = web::block(move || file.write_all(&full).map(|()| file)).await;
            file = written.map_err(|_| compute::broken())?.map_err(|error| not_stored(&error))?;
        }
        if ended {
            return Ok(size);
        }
    }
}

/// A stored file as a stream of pieces, each read on a thread of its own; `kept` is dropped after the last of them.
pub fn pieces<K: 'static>(file: File, kept: K) -> impl Stream<Item = Result<Bytes, std::io::Error>> {
    futures_util::stream::unfold((Some(file), kept), |(file, kept)| async move {
        let mut file = file?;
        let read = web::block(move || {
            let mut piece = Vec::with_capacity(PIECE);
            (&mut file).take(PIECE as u64).read_to_end(&mut piece).map(|_| (piece, file))
        });
        match read.await {
            Ok(Ok((piece, _))) if piece.is_empty() => None,
            Ok(Ok((piece, file))) => Some((Ok(piece.into()), (Some(file), kept))),
            Ok(Err(error)) => Some((Err(error), (None, kept))),
            Err(error) => Some((Err(std::io::Error::other(error)), (None, kept))),
        }
    })
}

fn last_part(name: &str) -> &str {
    name.rsplit(['/', '\\', ':']).next().unwrap_or_default().trim()
}

/// The extension of a name, if it is one of a workbook.
fn extension(name: &str) -> Option<&'static str> {
    let (_, own) = name.rsplit_once('.')?;
    EXTENSIONS.into_iter().find(|known| own.eq_ignore_ascii_case(known))
}

/// What a nameless file is, by its first bytes: a package, an old binary workbook, or text.
fn sniff(path: &Path) -> &'static str {
    let mut start = [0; 80];
    let read = File::open(path).and_then(|mut file| file.read(&mut start)).unwrap_or_default();
    let start = &start[..read];
    if start.starts_with(b"PK") {
        let open_document = start.get(30..).is_some_and(|rest| rest.starts_with(b"mimetypeapplication/vnd.oasis.opendocument"));
        if open_document { "ods" } else { "xlsx" }
    } else if start.starts_with(&[0xd0, 0xcf, 0x11, 0xe0]) {
        "xls"
    } else {
        "csv"
    }
}

fn empty() -> Problem {
    Problem::new(ProblemKind::Malformed, "upload-empty", "no workbook was sent")
        .help("Send the file as the body, or as the file of a form (multipart/form-data).")
}

fn several() -> Problem {
    Problem::new(ProblemKind::Malformed, "upload-several", "several files were sent, and one workbook is annotated at a time")
        .help("Send each workbook by itself.")
}

fn not_stored(error: &std::io::Error) -> Problem {
    Problem::new(ProblemKind::Broken, "upload-not-stored", format!("the workbook cannot be stored for working on it: {error}"))
        .help("Free some room on the disk that holds temporary files.")
}
