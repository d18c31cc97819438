package report

// Unprinted lists the characters of a text that the fonts of the PDF lack, by code point; "" if there are none. The PDF prints U+FFFD
// for each of them; the other documents keep the text as it is.
func Unprinted(text string) string {
	u := unseen{}
	u.clean(text)
	return u.list()
}
