/* The lines that are measured. Each stands under the same name in
 * testdata/protocol/encode.json, which says what its bytes are. */
#define CASES(X) \
	X("val of the longest line", 'a', 'g', 0xffff, 0xffffffff, -9999999) \
	X("val of a usual line",     'a', 'g', 200,    1234567,    7240) \
	X("val without a count",     'b', 'x', 201,    1234667,    0) \
	X("val of count 1",          'a', 'g', 1,      2,          1) \
	X("val of count 9999999",    'a', 'g', 1,      2,          9999999) \
	X("val of count -7654321",   'a', 'g', 1,      2,          -7654321)
