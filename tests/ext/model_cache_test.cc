// How often a model is parsed: linked, so that the test build's counter can be read.
#include "ext/model_cache.h"

#include <sqlite3.h>

#include "ext/ladderline.h"
#include "ext/model_text.h"
#include "tests/reference/reference.h"

namespace ladderline::testing {
namespace {

// The text of a model of two numbers (models_r.R), made distinct by its name.
std::string ModelNamed(std::string_view name) {
  auto model = ReadOrderedJson("models_r.json")["cases"][0]["model"];
  model["name"] = name;
  return model.dump();
}

class ModelCacheTest : public ::testing::Test {
 protected:
  ModelCacheTest() {
    sqlite3_open(":memory:", &db_);
    EXPECT_EQ(sqlite3_ladderline_init(db_, nullptr, nullptr), SQLITE_OK);
    Count("CREATE TABLE tree(girth, height, region)");
    // 4,800 rows; neighbours belong to different regions.
    Count(
        "WITH RECURSIVE n(i) AS (SELECT 0 UNION ALL SELECT i + 1 FROM n WHERE i < 4799) "
        "INSERT INTO tree SELECT 9 + i % 10, 65 + i % 20, i % 12 FROM n");
    Count("CREATE TABLE model(region, m)");
    for (int region = 0; region < 12; ++region) {
      Count("INSERT INTO model VALUES(" + std::to_string(region) + ", ?1)",
            ModelNamed("region " + std::to_string(region)));
    }
  }
  ~ModelCacheTest() override { sqlite3_close(db_); }

  // Runs one statement with `model` as its parameter; the texts parsed meanwhile. `total_` is its
  // last row's first column.
  std::int64_t Count(const std::string& sql, const std::string& model = "") {
    const std::int64_t before = ModelParses();
    sqlite3_stmt* statement = nullptr;
    EXPECT_EQ(sqlite3_prepare_v2(db_, sql.c_str(), -1, &statement, nullptr), SQLITE_OK)
        << sqlite3_errmsg(db_);
    if (sqlite3_bind_parameter_count(statement) > 0)
      sqlite3_bind_text(statement, 1, model.data(), static_cast<int>(model.size()), SQLITE_STATIC);
    int rc;
    while ((rc = sqlite3_step(statement)) == SQLITE_ROW)
      total_ = sqlite3_column_double(statement, 0);
    EXPECT_EQ(rc, SQLITE_DONE) << sqlite3_errmsg(db_);
    sqlite3_finalize(statement);
    return ModelParses() - before;
  }

  sqlite3* db_ = nullptr;
  double total_ = 0;
};

TEST_F(ModelCacheTest, AModelIsParsedOnceHoweverItComes) {
  const auto sum = [](const std::string& model) {
    return std::string("SELECT sum(fitted_mean(")
        .append(model)
        .append(", girth, height)) FROM tree");
  };
  EXPECT_EQ(Count(sum(std::string("'").append(ModelNamed("literal")).append("'"))), 1);
  const double expected = total_;
  EXPECT_GT(expected, 0);
  EXPECT_EQ(Count(sum("?1"), ModelNamed("bound")), 1);
  EXPECT_EQ(total_, expected);
  EXPECT_EQ(Count("WITH f(m) AS (SELECT ?1) SELECT sum(fitted_mean(m, girth, height)) FROM f, tree",
                  ModelNamed("common table")),
            1);
  EXPECT_EQ(total_, expected);
  Count("CREATE TABLE saved(m)");
  Count("INSERT INTO saved VALUES(?1)", ModelNamed("subquery"));
  EXPECT_EQ(Count(sum("(SELECT m FROM saved)")), 1);
  EXPECT_EQ(total_, expected);
  Count("UPDATE saved SET m = ?1", ModelNamed("joined"));
  EXPECT_EQ(Count("SELECT sum(fitted_mean(m, girth, height)) FROM tree, saved"), 1);
  EXPECT_EQ(total_, expected);
}

TEST_F(ModelCacheTest, TwelveModelsJoinedByGroupAreParsedOnceEach) {
  EXPECT_EQ(Count("SELECT sum(fitted_mean(m, girth, height)) FROM tree JOIN model USING (region)"),
            12);
  // All are still at hand for the next statement, whichever function asks.
  EXPECT_EQ(Count("SELECT count(fit_note(m, girth, height)) FROM tree JOIN model USING (region)"),
            0);
  EXPECT_EQ(Count("SELECT count(*) FROM model, model_terms(model.m)"), 0);
  EXPECT_EQ(total_, 36);
  EXPECT_EQ(Count("SELECT count(fact(m, 'residual_sd')) FROM model"), 0);
}

TEST_F(ModelCacheTest, PairsCostNoMoreThanPositions) {
  EXPECT_EQ(Count("SELECT sum(fitted_mean(?1, 'height', height, 'girth', girth)) FROM tree",
                  ModelNamed("pairs")),
            1);
  const double pairs = total_;
  Count("SELECT sum(fitted_mean(?1, girth, height)) FROM tree", ModelNamed("pairs"));
  EXPECT_EQ(total_, pairs);
  // Labels that are not constant are matched anew where they change.
  Count(
      "SELECT sum(fitted_mean(?1, iif(region % 2, 'height', 'girth'), iif(region % 2, height, "
      "girth), iif(region % 2, 'girth', 'height'), iif(region % 2, girth, height))) FROM tree",
      ModelNamed("pairs"));
  EXPECT_EQ(total_, pairs);
}

TEST_F(ModelCacheTest, AnotherModelInTheSamePlaceIsNotMistaken) {
  auto other = nlohmann::ordered_json::parse(ModelNamed("other"));
  other["basis"]["origin"][0] = 0;
  other["name"] = "equal";
  const std::string text = other.dump();
  Count("SELECT fitted_scale(?1, 12, 75)", ModelNamed("equal"));
  const double first = total_;
  Count("SELECT fitted_scale(?1, 12, 75)", text);
  EXPECT_NE(total_, first);
}

// The texts that had to be parsed, 0 or 1.
int ParsesOf(ModelCache& cache, const std::string& text) {
  if (cache.Find(text) != nullptr) return 0;
  EXPECT_TRUE(cache.Parse(text).ok());
  EXPECT_NE(cache.Find(text), nullptr);
  return 1;
}

TEST(ModelCacheMemory, KeepsSixteenModels) {
  ModelCache cache;
  const auto parses = [&](int i) { return ParsesOf(cache, ModelNamed(std::to_string(i))); };
  for (int i = 0; i < 17; ++i) EXPECT_EQ(parses(i), 1);
  EXPECT_EQ(parses(16), 0);
  EXPECT_EQ(parses(1), 0);
  EXPECT_EQ(parses(0), 1);  // the one not used for longest had left
}

TEST(ModelCacheMemory, LargeModelsLeaveEarlyButForTheLatest) {
  ModelCache cache;
  const std::string a = ModelNamed(std::string(size_t{9} << 20, 'a'));
  const std::string b = ModelNamed(std::string(size_t{9} << 20, 'b'));
  EXPECT_EQ(ParsesOf(cache, a), 1);
  EXPECT_EQ(ParsesOf(cache, a), 0);
  EXPECT_EQ(ParsesOf(cache, b), 1);  // 18 MiB together
  EXPECT_EQ(ParsesOf(cache, b), 0);
  EXPECT_EQ(ParsesOf(cache, a), 1);
}

TEST(ModelCacheMemory, ABadTextIsNotKept) {
  ModelCache cache;
  EXPECT_EQ(cache.Parse("n/a").error(), "it is not JSON, at byte 2");
  EXPECT_EQ(cache.Find("n/a"), nullptr);
}

}  // namespace
}  // namespace ladderline::testing
