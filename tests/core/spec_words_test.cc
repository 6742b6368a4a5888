#include "core/transform/spec_words.h"

#include <gtest/gtest.h>

namespace ladderline::testing {
namespace {

TEST(SpecWords, RoundNumbersToSixDigits) {
  const auto words = [](const char* spec) {
    return SpecWords(*Transform::ReadSpec(spec).value().transform);
  };
  EXPECT_EQ(words("log_offset 20.09916478508375"), "log_offset 20.0992");
  EXPECT_EQ(words("log_offset"), "log_offset");
  EXPECT_EQ(words("log_offset 1 10"), "log_offset 1 10");
  EXPECT_EQ(words("identity"), "identity");
  EXPECT_EQ(words("z_score -1234567.8 0.00123456789"), "z_score -1234570 0.00123457");
  // Ends that would round to one number stay as they are.
  EXPECT_EQ(words("rescale 10000001 10000002"), "rescale 10000001 10000002");
}

}  // namespace
}  // namespace ladderline::testing
