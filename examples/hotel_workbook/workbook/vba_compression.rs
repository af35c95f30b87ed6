//! The compression of macro sources, [MS-OVBA] section 2.4.1: chunks of 4096 bytes, each a run of tokens that are either a
//! byte or a copy of bytes shortly before.

const CHUNK: usize = 4096;

/// Compresses text, in which every 4096 bytes must take fewer bytes when compressed, as source code does.
pub fn compress(data: &[u8]) -> Vec<u8> {
    let mut container = vec![0x01];
    for chunk in data.chunks(CHUNK) {
        let tokens = tokens(chunk);
        // The length less three, the signature 0b011, and the flag that says compressed.
        let header = (tokens.len() + 2 - 3) as u16 | 0b1011 << 12;
        container.extend(header.to_le_bytes());
        container.extend(tokens);
    }
    container
}

/// Groups of eight tokens, each group after a byte whose bits tell copies from bytes.
fn tokens(chunk: &[u8]) -> Vec<u8> {
    let mut written = Vec::new();
    let mut at = 0;
    while at < chunk.len() {
        let flags_at = written.len();
        written.push(0);
        for bit in 0..8 {
            if at == chunk.len() {
                break;
            }
            match longest_match(chunk, at) {
                Some((distance, length)) => {
                    let length_bits = 16 - distance_bits(at);
                    let token = ((distance - 1) << length_bits | (length - 3)) as u16;
                    written.extend(token.to_le_bytes());
                    written[flags_at] |= 1 << bit;
                    at += length;
                }
                None => {
                    written.push(chunk[at]);
                    at += 1;
                }
            }
        }
    }
    written
}

/// How many bits of a copy token tell the distance at a place of the chunk: enough for the place, from 4 to 12.
fn distance_bits(at: usize) -> u32 {
    (at.next_power_of_two().trailing_zeros()).clamp(4, 12)
}

/// How far back the longest repetition of at least three bytes begins, and how long it is.
fn longest_match(chunk: &[u8], at: usize) -> Option<(usize, usize)> {
    let longest = ((1 << (16 - distance_bits(at))) + 2).min(chunk.len() - at);
    let length_from = |start: usize| (0..longest).take_while(|&offset| chunk[start + offset] == chunk[at + offset]).count();
    let (length, start) = (0..at).rev().map(|start| (length_from(start), start)).max_by_key(|&(length, _)| length)?;
    (length >= 3).then_some((at - start, length))
}
