package cohort

import (
	"bytes"
	"compress/gzip"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"unicode/utf8"

	"kindwell/internal/names"
)

const (
	maxBytes   = 2 << 30 // a table, unpacked
	maxColumns = 100_000
	maxCell    = 32_767 // characters, as spreadsheets have it
)

// InputFile is the record of a table that was read.
type InputFile struct {
	// File is the name as the study gives it.
	File string
	// SHA256 is the digest of the file as it lies on the disk, in hexadecimal.
	SHA256 string
	// Bytes is its size on the disk.
	Bytes int64
}

// source is the text of a table: UTF-8 without byte-order mark.
type source struct {
	file  string
	comma rune
	text  []byte
	input InputFile
}

// openSource reads a table whole. A relative name counts from folder.
func openSource(folder, file string) (*source, *Fault) {
	fault := func(format string, args ...any) *Fault {
		return &Fault{File: file, Message: fmt.Sprintf(format, args...)}
	}
	comma, packed, ok := format(file)
	if !ok {
		return nil, fault("a table is named .csv (commas) or .tsv (tabs), or one of these with .gz; rename the file after what it holds")
	}
	path := file
	if !filepath.IsAbs(path) {
		path = filepath.Join(folder, path)
	}
	f, err := os.Open(path)
	if err != nil {
		return nil, fault("%s", whyNot(err, path))
	}
	defer f.Close()
	info, err := f.Stat()
	if err != nil {
		return nil, fault("%s", whyNot(err, path))
	}
	if info.IsDir() {
		return nil, fault("is a folder, not a table")
	}
	digest := sha256.New()
	var size counter
	raw := io.TeeReader(f, io.MultiWriter(digest, &size))
	text, why := unpack(raw, packed, info.Size())
	if why != "" {
		return nil, fault("%s", why)
	}
	// What a packed file holds beyond its end belongs to the digest too.
	if _, err := io.Copy(io.Discard, raw); err != nil {
		return nil, fault("%s", whyNot(err, path))
	}
	input := InputFile{File: file, SHA256: hex.EncodeToString(digest.Sum(nil)), Bytes: int64(size)}
	text, trouble := checkText(file, text)
	if trouble != nil {
		return nil, trouble
	}
	return &source{file: file, comma: comma, text: text, input: input}, nil
}

// counter counts the bytes written to it.
type counter int64

func (c *counter) Write(p []byte) (int, error) {
	*c += counter(len(p))
	return len(p), nil
}

// format tells delimiter and packing from a file's name.
func format(file string) (comma rune, packed, ok bool) {
	name := strings.ToLower(file)
	if strings.HasSuffix(name, ".gz") {
		packed = true
		name = strings.TrimSuffix(name, ".gz")
	}
	switch filepath.Ext(name) {
	case ".csv":
		return ',', packed, true
	case ".tsv":
		return '\t', packed, true
	}
	return 0, packed, false
}

// unpack reads everything, through gzip when packed; size is that on the disk.
// why is not empty when it cannot.
func unpack(r io.Reader, packed bool, size int64) (text []byte, why string) {
	if packed {
		z, err := gzip.NewReader(r)
		if errors.Is(err, io.EOF) {
			return nil, "the file is empty"
		}
		if err != nil {
			return nil, "is not packed with gzip, whatever its name says; drop .gz from the name"
		}
		r = z
	}
	var buffer bytes.Buffer
	buffer.Grow(int(min(size, maxBytes/2)) + bytes.MinRead)
	_, err := buffer.ReadFrom(io.LimitReader(r, maxBytes+1))
	switch {
	case errors.Is(err, io.ErrUnexpectedEOF):
		return nil, "the packed file ends too early; copy it anew"
	case errors.Is(err, gzip.ErrChecksum), errors.Is(err, gzip.ErrHeader):
		return nil, "the packed file is damaged; copy it anew"
	case err != nil:
		return nil, "cannot be read: " + plainError(err)
	case int64(buffer.Len()) > maxBytes:
		return nil, "is larger than 2 GiB; leave out columns that the study does not use"
	}
	return buffer.Bytes(), ""
}

// checkText refuses what is not plain UTF-8 text with line feeds, and drops the
// byte-order mark.
func checkText(file string, text []byte) ([]byte, *Fault) {
	fault := func(row int, format string, args ...any) *Fault {
		return &Fault{File: file, Row: row, Message: fmt.Sprintf(format, args...)}
	}
	switch {
	case bytes.HasPrefix(text, []byte{0xff, 0xfe}), bytes.HasPrefix(text, []byte{0xfe, 0xff}):
		return nil, fault(0, "is UTF-16 text; save it as UTF-8")
	case bytes.HasPrefix(text, []byte{0x1f, 0x8b}):
		return nil, fault(0, "is packed with gzip; add .gz to the name")
	case bytes.HasPrefix(text, []byte("PK\x03\x04")):
		return nil, fault(0, "is a spreadsheet or a zip archive; export the sheet as CSV in UTF-8")
	}
	text = bytes.TrimPrefix(text, []byte{0xef, 0xbb, 0xbf})
	if len(bytes.TrimSpace(text)) == 0 {
		return nil, fault(0, "the file is empty")
	}
	if at := bytes.IndexByte(text, 0); at >= 0 {
		if head := text[:min(len(text), 1024)]; bytes.Count(head, []byte{0}) > len(head)/4 {
			return nil, fault(0, "is UTF-16 text; save it as UTF-8")
		}
		return nil, fault(lineOf(text, at), "holds a NUL byte, so this is no text; export the table anew")
	}
	if !utf8.Valid(text) {
		at := firstInvalid(text)
		return nil, fault(lineOf(text, at), "byte 0x%02X is not UTF-8 (an accented letter in an older encoding?); save the file as UTF-8", text[at])
	}
	if bytes.IndexByte(text, '\n') < 0 && bytes.IndexByte(text, '\r') >= 0 {
		return nil, fault(0, "its lines end in carriage returns alone; save it with line feeds (Unix or Windows line ends)")
	}
	return text, nil
}

// lineOf is the line of the byte at an offset, counted from 1.
func lineOf(text []byte, at int) int { return 1 + bytes.Count(text[:at], []byte{'\n'}) }

// firstInvalid is the offset of the first byte that is not UTF-8.
func firstInvalid(text []byte) int {
	for at := 0; at < len(text); {
		r, size := utf8.DecodeRune(text[at:])
		if r == utf8.RuneError && size == 1 {
			return at
		}
		at += size
	}
	return len(text)
}

// whyNot words the failure to open a file.
func whyNot(err error, path string) string {
	switch {
	case errors.Is(err, fs.ErrNotExist):
		entries, dirErr := os.ReadDir(filepath.Dir(path))
		if dirErr != nil {
			return "there is no such file, nor its folder"
		}
		var tables []string
		for _, e := range entries {
			if _, _, ok := format(e.Name()); ok {
				tables = append(tables, e.Name())
			}
		}
		if near := names.Nearest(filepath.Base(path), tables); near != "" {
			return "there is no such file; the nearest name in its folder is " + quote(near)
		}
		return "there is no such file"
	case errors.Is(err, fs.ErrPermission):
		return "may not be read: permission denied"
	}
	return "cannot be read: " + plainError(err)
}

// plainError is an error's text without the path, which the address gives.
func plainError(err error) string {
	var p *fs.PathError
	if errors.As(err, &p) {
		err = p.Err
	}
	return err.Error()
}
