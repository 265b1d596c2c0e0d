package readers

import "encoding/base64"

// base64Values[k] holds the 24-bit value of each character at place k of a group of
// four, its bytes in the order in which they are written; bit 24 marks a character
// that does not belong to the alphabet (RFC 4648, section 4).
var base64Values = func() (values [4][256]uint32) {
	const alphabet = "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/"
	for place := range values {
		for c := range values[place] {
			values[place][c] = 1 << 24
		}
		for i := range alphabet {
			value := uint32(i) << (18 - 6*place)
			values[place][alphabet[i]] = value>>16&0xff | value&0xff00 | value&0xff<<16
		}
	}
	return values
}()

// decodeBase64 decodes whole groups of four characters and returns the number of
// bytes; padding may only end the last group. On failure it also returns the place
// of the group at fault.
func decodeBase64(to, text []byte) (count int, fault int) {
	i := 0
	for ; i+4 < len(text); i += 4 {
		group := text[i : i+4 : i+4]
		value := base64Values[0][group[0]] | base64Values[1][group[1]] | base64Values[2][group[2]] | base64Values[3][group[3]]
		if value>>24 != 0 {
			return count, i
		}
		three := to[count : count+3 : count+3]
		three[0], three[1], three[2] = byte(value), byte(value>>8), byte(value>>16)
		count += 3
	}
	n, err := base64.StdEncoding.Decode(to[count:], text[i:])
	if err != nil || n == 0 {
		return count, i
	}
	return count + n, -1
}

// encodedLength returns the characters that base64 needs for a run of bytes.
func encodedLength(bytes int64) int64 { return (bytes + 2) / 3 * 4 }
