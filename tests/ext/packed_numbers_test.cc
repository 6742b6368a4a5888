#include "ext/packed_numbers.h"

#include <limits>

#include "tests/reference/reference.h"

namespace ladderline::testing {
namespace {

// Python 3.11: base64.b64encode(struct.pack('<d', 1.0)) and of '<dd', 1.0, -0.1.
TEST(PackedNumbers, AreLittleEndianDoublesInBase64) {
  EXPECT_EQ(PackNumbers(std::vector<double>{1}), "AAAAAAAA8D8=");
  EXPECT_EQ(PackNumbers(std::vector<double>{1, -0.1}), "AAAAAAAA8D+amZmZmZm5vw==");
  EXPECT_EQ(PackNumbers({}), "");
}

TEST(PackedNumbers, ComeBackBitForBit) {
  const std::vector<double> numbers = {0,    -0.0,   1,      1e308, 5e-324, 0.1,
                                       3.25, -1e-17, 123456, 2,     3,      7};
  for (size_t n = 0; n <= numbers.size(); ++n) {
    const std::vector<double> some(numbers.begin(), numbers.begin() + static_cast<long>(n));
    const auto back = UnpackNumbers(PackNumbers(some));
    ASSERT_TRUE(back.has_value());
    ASSERT_EQ(*back, some);
    EXPECT_EQ(PackNumbers(*back), PackNumbers(some));  // -0 too
  }
}

TEST(PackedNumbers, OtherTextsAreNone) {
  for (const char* text : {"A", "AAAA", "AAAAAAAA8D8", "AAAAAAAA8D8==", "AAAAAAAA8D9=", "=",
                           "AAAAAAAA8D8=AAAA", "AAAAAAAA8D_=", "AAAAAAAA 8D8=", "AAAAAAAA8D8=\n"})
    EXPECT_FALSE(UnpackNumbers(text).has_value()) << text;
}

}  // namespace
}  // namespace ladderline::testing
