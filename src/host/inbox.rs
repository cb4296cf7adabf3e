//! What a scheme has written and nobody has read yet.

/// Bytes in the order in which they came. Large messages leave without a copy, many small ones without moving the rest each time.
#[derive(Debug, Default)]
pub(super) struct Inbox {
    bytes: Vec<u8>,
    taken: usize,
}

impl Inbox {
    /// What has not been taken yet.
    pub fn pending(&self) -> &[u8] {
        &self.bytes[self.taken..]
    }

    /// Takes the first `count` bytes.
    pub fn take(&mut self, count: usize) -> Vec<u8> {
        let end = self.taken + count;
        if self.taken == 0 && 2 * count >= self.bytes.len() {
            let rest = self.bytes.split_off(end);
            return std::mem::replace(&mut self.bytes, rest);
        }
        let message = self.bytes[self.taken..end].to_vec();
        self.taken = end;
        message
    }

    /// Makes room for `count` more bytes that are known to come.
    pub fn expect(&mut self, count: usize) {
        self.forget_taken();
        self.bytes.reserve_exact(count);
    }

    /// Where new bytes are read to, with room for at least 64 KiB.
    pub fn room(&mut self) -> &mut Vec<u8> {
        self.forget_taken();
        if self.bytes.capacity() - self.bytes.len() < 1 << 16 {
            // Growth by doubling, beginning with one pipe.
            self.bytes.reserve(self.bytes.len().max(1 << 16));
        }
        &mut self.bytes
    }

    /// Throws everything away.
    pub fn clear(&mut self) {
        self.bytes.clear();
        self.taken = 0;
    }

    fn forget_taken(&mut self) {
        self.bytes.drain(..self.taken);
        self.taken = 0;
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn bytes_leave_in_the_order_in_which_they_came() {
        let mut inbox = Inbox::default();
        let (mut written, mut read) = (Vec::new(), Vec::new());
        for round in 0..50u8 {
            let batch: Vec<u8> = (0..=round).map(|k| k.wrapping_mul(7) ^ round).collect();
            inbox.room().extend_from_slice(&batch);
            written.extend(batch);
            // Sometimes small pieces, sometimes nearly all, sometimes nothing.
            for share in [9, 2, 1].iter().take(usize::from(round % 4)) {
                let count = inbox.pending().len() / share;
                assert_eq!(inbox.pending()[..count], written[read.len()..read.len() + count]);
                read.extend(inbox.take(count));
            }
            inbox.expect(10);
        }
        let count = inbox.pending().len();
        read.extend(inbox.take(count));
        assert_eq!(read, written);
        assert!(inbox.pending().is_empty());
    }
}
