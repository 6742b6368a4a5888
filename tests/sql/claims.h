// Words that sentences about a fit must not use: a regression shows what goes together.
#ifndef LADDERLINE_TESTS_SQL_CLAIMS_H_
#define LADDERLINE_TESTS_SQL_CLAIMS_H_

#include <algorithm>
#include <cctype>
#include <string>
#include <vector>

namespace ladderline::testing {

// The claims in a text: words of cause and change, and `significant` with its kin.
inline std::vector<std::string> ClaimsIn(const std::string& text) {
  static const std::vector<std::string> kWords = {
      "cause",      "causes",  "caused",   "because",     "leads",     "lead",      "led",
      "drives",     "drive",   "driven",   "affects",     "affect",    "effect",    "effects",
      "impact",     "impacts", "results",  "produces",    "raises",    "raise",     "lowers",
      "reduces",    "reduce",  "increase", "increases",   "increased", "decrease",  "decreases",
      "explains",   "due",     "thanks",   "responsible", "brings",    "influence", "influences",
      "determines", "boosts",  "proves",   "prove",       "proven"};
  std::vector<std::string> claims;
  std::string word;
  for (const char c : text + " ") {
    if (std::isalpha(static_cast<unsigned char>(c)) != 0) {
      word += static_cast<char>(std::tolower(static_cast<unsigned char>(c)));
      continue;
    }
    if (std::find(kWords.begin(), kWords.end(), word) != kWords.end() ||
        word.find("significan") != std::string::npos)
      claims.push_back(word);
    word.clear();
  }
  return claims;
}

}  // namespace ladderline::testing

#endif  // LADDERLINE_TESTS_SQL_CLAIMS_H_
