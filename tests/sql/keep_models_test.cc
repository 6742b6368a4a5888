// sql/keep_models.sql: models kept with their history, and what a refresh publishes.
#include <gmock/gmock.h>

#include <set>

#include "tests/sql/kept_models.h"

namespace ladderline::testing {
namespace {

// ---- What is kept and published ----

TEST(KeepModels, LiveViewsHoldWhatTheFunctionsGiveAndPublishedTablesTheFormForRelease) {
  const KeptModels db;
  db.Refresh();
  const std::string model = "(SELECT " + std::string(kTimeModel) + " AS m FROM visit)";
  const std::string released = "(SELECT model_for_release(m, 5) AS m FROM " + model + ")";
  const auto of = [&](const std::string& columns, const std::string& part,
                      const std::string& from) {
    return db.Rows("SELECT " + columns + " FROM " + from + ", model_" + part + "(m) AS t");
  };
  for (const std::string part : {"terms", "effects", "checks"}) {
    SCOPED_TRACE(part);
    EXPECT_EQ(db.Rows("SELECT * FROM live_" + part + " WHERE name = 'time'"),
              of("'time', t.*", part, model));
    const auto published = of("'time', t.*", part, released);
    EXPECT_FALSE(published.empty());
    EXPECT_EQ(db.Rows("SELECT * FROM published_" + part + " WHERE name = 'time' ORDER BY position"),
              published);
  }
  for (const auto& [part, columns] :
       std::map<std::string, std::string>{{"facts", "fact, value"}, {"cautions", "caution"}}) {
    SCOPED_TRACE(part);
    EXPECT_EQ(db.Rows("SELECT " + columns + " FROM live_" + part + " WHERE name = 'time'"),
              of(columns, part, model));
    EXPECT_EQ(db.Rows("SELECT " + columns + " FROM published_" + part +
                      " WHERE name = 'time' "
                      "ORDER BY position"),
              of(columns, part, released));
  }
  EXPECT_EQ(db.Rows("SELECT model, brief FROM published_text WHERE name = 'time'"),
            db.Rows("SELECT m, model_brief(m) FROM " + released));
  EXPECT_EQ(
      db.Rows("SELECT name, status, refused_since, reason, response, rows FROM published_model "
              "ORDER BY name"),
      (Table{{"log time", "fresh", {}, {}, "minutes", "40"},
             {"time", "fresh", {}, {}, "minutes", "60"}}));
  EXPECT_EQ(
      db.Rows("SELECT p.r_squared, p.fitted_at FROM published_model AS p WHERE name = 'time'"),
      db.Rows("SELECT fact(m, 'r_squared'), at FROM " + released + ", model_refresh"));
}

TEST(KeepModels, NoKeyAndNoGroupUnderTheFloorIsPublished) {
  const KeptModels db;
  db.NewSource(
      "SELECT 'time' AS name, ols_model('minutes', minutes, 'stairs', stairs, 'district', "
      "CASE WHEN id < 4 THEN 'Tinyplace' ELSE district END, 'visit | key', 'case-' || id) AS "
      "model FROM visit");
  db.Refresh();
  db.Run("INSERT INTO visit VALUES (61, 'North', 30, 3), (62, 'East', 40, 3)");
  const auto cells_with = [&](const std::string& text) {
    int found = 0;
    for (const auto& [table, rows] : ContentsOf(db)) {
      if (table.rfind("published_", 0) != 0) continue;
      for (const auto& row : rows)
        for (const auto& cell : row) found += cell && cell->find(text) != std::string::npos;
    }
    return found;
  };
  EXPECT_EQ(db.Text("SELECT model LIKE '%case-%' FROM model_fit"), "1");
  for (const bool twice : {false, true}) {
    if (twice) db.Refresh();
    EXPECT_EQ(cells_with("case-"), 0);
    EXPECT_EQ(db.Text("SELECT count(*) FROM live_terms WHERE category_level = 'Tinyplace'"), "1");
    EXPECT_EQ(db.Text("SELECT count(*) FROM published_terms WHERE category_level IN ('Tinyplace', "
                      "'East')"),
              "0");
    EXPECT_GT(cells_with("West"), 0);
  }
  EXPECT_EQ(db.Text("SELECT count(*) > 5 FROM published_changes"), "1");
  EXPECT_EQ(
      db.Text("SELECT count(*) FROM published_changes WHERE term IN ('district is Tinyplace', "
              "'district is East')"),
      "0");
}

TEST(KeepModels, AFitThatMayNotBeGivenAwayIsKeptAndWithheld) {
  const KeptModels db;
  db.Run("UPDATE release_rule SET floor = 41");
  db.Run("INSERT INTO model_refresh(at) VALUES ('2025-03-03')");
  const std::string why = "not released: fewer than 41 rows were fitted";
  EXPECT_EQ(db.Rows("SELECT status, fitted_at, refused_since, reason, rows FROM published_model "
                    "WHERE name = 'log time'"),
            (Table{{"withheld", "2025-03-03", {}, why, {}}}));
  EXPECT_EQ(db.Text("SELECT fact(model, 'rows_fitted') FROM current_model WHERE name = 'log time'"),
            "40");
  for (const std::string table : {"text", "facts", "terms", "effects", "checks", "cautions"}) {
    EXPECT_EQ(db.Text("SELECT count(*) FROM published_" + table + " WHERE name = 'log time'"), "0")
        << table;
  }
  db.NewSource("SELECT 'log time' AS name, NULL AS model");
  db.Run("INSERT INTO model_refresh(at) VALUES ('2025-03-04')");
  EXPECT_EQ(db.Rows("SELECT status, fitted_at, refused_since, reason FROM published_model "
                    "WHERE name = 'log time'"),
            (Table{{"refused", "2025-03-03", "2025-03-04",
                    "model_source gives no model under this name; the last sound fit is " + why}}));
  db.Run("UPDATE release_rule SET floor = 5");
  db.Refresh();
  EXPECT_EQ(db.Text("SELECT rows FROM published_model WHERE name = 'log time'"), "40");
}

TEST(KeepModels, EveryFitIsKeptAndTheNewestIsCurrent) {
  const KeptModels db;
  db.Run("INSERT INTO model_refresh(at) VALUES ('2024-12-01')");
  db.Run("INSERT INTO visit VALUES (61, 'North', 400, 3)");
  db.Run("INSERT INTO model_refresh(at) VALUES ('2025-01-01')");
  EXPECT_EQ(db.Rows("SELECT refresh, name, status, fact(model, 'rows_fitted') FROM model_fit"),
            (Table{{"1", "time", "fitted", "60"},
                   {"1", "log time", "fitted", "40"},
                   {"2", "time", "fitted", "61"},
                   {"2", "log time", "fitted", "41"}}));
  EXPECT_EQ(db.Rows("SELECT name, refresh, at FROM current_model ORDER BY name"),
            (Table{{"log time", "2", "2025-01-01"}, {"time", "2", "2025-01-01"}}));
  EXPECT_EQ(db.Text("SELECT made_by = ladderline_version() FROM model_refresh"), "1");
}

TEST(KeepModels, ChangesAreThoseFromTheSoundFitBefore) {
  const KeptModels db;
  db.Run("INSERT INTO model_refresh(at) VALUES ('2025-03-03')");
  EXPECT_EQ(db.Text("SELECT count(*) FROM published_changes"), "0");
  db.Run("INSERT INTO visit SELECT id + 60, 'East', minutes + 40, stairs FROM visit WHERE id < 9");
  db.Run("INSERT INTO model_refresh(at) VALUES ('2025-03-04')");
  const auto direct = [&](const std::string& before, const std::string& after) {
    return db.Rows(
        "SELECT d.* FROM model_fit AS a JOIN model_fit AS b USING (name), model_difference(" +
        before + ", " + after + ") AS d WHERE name = 'time' AND a.refresh = 1 AND b.refresh = 2");
  };
  const std::string columns = "SELECT term, before, after, change, status, sentence FROM ";
  EXPECT_EQ(db.Rows(columns + "live_changes WHERE name = 'time'"), direct("a.model", "b.model"));
  EXPECT_EQ(db.Rows(columns + "published_changes WHERE name = 'time' ORDER BY position"),
            direct("model_for_release(a.model, 5)", "model_for_release(b.model, 5)"));
  EXPECT_EQ(db.Rows("SELECT term, before, after FROM published_changes WHERE name = 'time' "
                    "AND (term = 'rows_fitted' OR status = 'new')"),
            (Table{{"rows_fitted", "60", "68"},
                   {"district is East",
                    {},
                    db.Text("SELECT coefficient(model, 'district is East') "
                            "FROM current_model WHERE name = 'time'")}}));
  // A refused fit between two sound ones is passed over, and one that cannot be read gives none.
  db.Run("UPDATE model_fit SET status = 'refused', reason = 'thin' WHERE refresh = 2");
  db.Run("INSERT INTO model_refresh(at) VALUES ('2025-03-05')");
  EXPECT_EQ(db.Rows("SELECT DISTINCT name, before_at FROM published_changes ORDER BY name"),
            (Table{{"log time", "2025-03-03"}, {"time", "2025-03-03"}}));
  db.Run("UPDATE model_fit SET model = 'edited' WHERE refresh = 3 AND name = 'time'");
  db.Run("INSERT INTO model_refresh(at) VALUES ('2025-03-06')");
  EXPECT_EQ(db.Rows("SELECT DISTINCT name, before_at FROM published_changes"),
            (Table{{"log time", "2025-03-05"}}));
  EXPECT_EQ(db.Text("SELECT group_concat(DISTINCT name) FROM live_changes"), "log time");
}

TEST(KeepModels, EachModelIsFittedOnceARefresh) {
  // A function that counts its calls sees every row once, also where a view's column is a subquery
  // that SQLite would run again for each use of the column.
  for (const std::string source :
       {"SELECT 'a' AS name, ols_model('minutes', seen(minutes), 'stairs', stairs) AS model FROM "
        "visit",
        "SELECT 'a' AS name, (SELECT ols_model('minutes', seen(minutes), 'stairs', stairs) "
        "FROM visit) AS model"}) {
    SCOPED_TRACE(source);
    const KeptModels db("CREATE VIEW model_source AS SELECT 'a' AS name, NULL AS model");
    int calls = 0;
    sqlite3_create_function(
        db.handle(), "seen", 1, SQLITE_UTF8 | SQLITE_INNOCUOUS, &calls,
        [](sqlite3_context* context, int, sqlite3_value** values) {
          ++*static_cast<int*>(sqlite3_user_data(context));
          sqlite3_result_value(context, values[0]);
        },
        nullptr, nullptr);
    db.NewSource(source);
    db.Refresh();
    EXPECT_EQ(calls, 60);
    EXPECT_EQ(db.Text("SELECT rows FROM published_model"), "60");
  }
}

TEST(KeepModels, TheScriptRunsTwiceAndChangesNothingThatIsKept) {
  const KeptModels db;
  db.Run("UPDATE release_rule SET floor = 7");
  db.Refresh();
  const auto before = ContentsOf(db);
  const std::string schema = "SELECT type, name, sql FROM sqlite_schema ORDER BY type, name";
  const auto schema_before = db.Rows(schema);
  db.Run(Statements("sql/keep_models.sql"));
  EXPECT_EQ(ContentsOf(db), before);
  EXPECT_EQ(db.Rows(schema), schema_before);
}

TEST(KeepModels, AnyTextIsANameAndNoneIsReadAsSql) {
  const KeptModels db;
  const std::vector<std::string> names = {"x'); DROP TABLE visit; --",
                                          "<script>alert(\"1\")</script>",
                                          "\u05e9\u05dc\u05d5\u05dd \U0001F527",
                                          "5",
                                          "%",
                                          std::string(2000, 'n')};
  std::string select;
  for (const std::string& name : names) {
    std::string quoted;
    for (const char c : name) quoted += c == '\'' ? "''" : std::string(1, c);
    select += (select.empty() ? "" : " UNION ALL ") + std::string("SELECT '") + quoted +
              "' AS name, " + kTimeModel + " AS model FROM visit";
  }
  db.NewSource(select);
  db.Refresh();
  for (const std::string table : {"published_model", "published_text", "live_terms"}) {
    std::set<std::string> found;
    for (const auto& row : db.Rows("SELECT DISTINCT name FROM " + table)) found.insert(*row[0]);
    EXPECT_EQ(found, std::set(names.begin(), names.end())) << table;
  }
  EXPECT_EQ(db.Text("SELECT count(*) FROM visit"), "60");
}

// ---- Refused models, lost names, texts that cannot be read ----

TEST(KeepModels, ARefusedModelIsKeptWithItsReasonAndTheLastSoundFitStaysPublished) {
  const KeptModels db;
  db.Run("INSERT INTO model_refresh(at) VALUES ('2025-03-03')");
  const auto terms = db.Rows("SELECT * FROM published_terms WHERE name = 'time'");
  db.Run("CREATE TABLE away AS SELECT * FROM visit WHERE id > 3; DELETE FROM visit WHERE id > 3");
  db.Run("INSERT INTO model_refresh(at) VALUES ('2025-03-04')");
  db.Run("INSERT INTO model_refresh(at) VALUES ('2025-03-05')");
  EXPECT_EQ(db.Rows("SELECT status, reason, fact(model, 'status') FROM model_fit "
                    "WHERE refresh = 2 AND name = 'time'"),
            (Table{{"refused", "needs 4 rows, has 3", "refused"}}));
  EXPECT_EQ(db.Rows("SELECT status, fitted_at, refused_since, reason, rows FROM published_model "
                    "WHERE name = 'time'"),
            (Table{{"refused", "2025-03-03", "2025-03-04", "too few rows", "60"}}));
  EXPECT_EQ(db.Rows("SELECT * FROM published_terms WHERE name = 'time'"), terms);
  EXPECT_EQ(db.Text("SELECT refresh FROM current_model WHERE name = 'time'"), "1");
  db.Run("INSERT INTO visit SELECT * FROM away");
  db.Run("INSERT INTO model_refresh(at) VALUES ('2025-03-06')");
  EXPECT_EQ(db.Rows("SELECT status, fitted_at, refused_since, reason FROM published_model "
                    "WHERE name = 'time'"),
            (Table{{"fresh", "2025-03-06", {}, {}}}));
}

TEST(KeepModels, WhatIsNoModelIsRefusedInWordsAndTheOthersAreRefreshed) {
  const KeptModels db;
  db.NewSource(
      "SELECT 'none' AS name, NULL AS model UNION ALL SELECT 'word', 'a model' UNION ALL "
      "SELECT 'blank', ' ' UNION ALL SELECT 'number', 12 UNION ALL "
      "SELECT 'blob', x'7B7D' UNION ALL SELECT 'other', '{\"lambda\":0.5}' UNION ALL "
      "SELECT 'time', " +
      std::string(kTimeModel) + " FROM visit");
  db.Refresh();
  EXPECT_EQ(
      db.Rows("SELECT name, status, reason, model IS NULL FROM model_fit"),
      (Table{
          {"none", "refused", "no model", "1"},
          {"word", "refused",
           "text 'a model' is not a model made by this extension (it is not JSON, at byte 1)", "1"},
          {"blank", "refused", "no model", "1"},
          {"number", "refused",
           "text '12' is not a model made by this extension (it must be an object)", "1"},
          {"blob", "refused", "a BLOB of 2 bytes is not a model made by this extension", "1"},
          {"other", "refused",
           "text '{\"lambda\":0.5}' is not a model made by this extension (it lacks "
           "ladderline_model)",
           "1"},
          {"time", "fitted", {}, "0"}}));
  // What is published quotes nothing of it.
  EXPECT_EQ(db.Rows("SELECT status, reason, count(*), sum(rows) FROM published_model GROUP BY 1"),
            (Table{{"fresh", {}, "1", "60"},
                   {"refused", "model_source gives no model under this name", "6", {}}}));
}

TEST(KeepModels, ALostNameKeepsItsLastFitAndSaysSoUntilItIsDeleted) {
  const KeptModels db;
  db.Run("INSERT INTO model_refresh(at) VALUES ('2025-03-03')");
  const auto terms = db.Rows("SELECT * FROM published_terms WHERE name = 'log time'");
  db.NewSource("SELECT 'time' AS name, " + std::string(kTimeModel) + " AS model FROM visit");
  db.Run("INSERT INTO model_refresh(at) VALUES ('2025-03-04')");
  EXPECT_EQ(db.Rows("SELECT name, status, fitted_at, refused_since, reason FROM published_model "
                    "ORDER BY name"),
            (Table{{"log time", "lost", "2025-03-03", "2025-03-04",
                    "model_source no longer gives this name"},
                   {"time", "fresh", "2025-03-04", {}, {}}}));
  EXPECT_EQ(db.Rows("SELECT * FROM published_terms WHERE name = 'log time'"), terms);
  db.Run("DELETE FROM model_fit WHERE name = 'log time'");
  db.Refresh();
  EXPECT_EQ(db.Text("SELECT group_concat(name) FROM published_model"), "time");
  EXPECT_EQ(db.Text("SELECT count(*) FROM published_terms WHERE name = 'log time'"), "0");
}

TEST(KeepModels, AFitThatCannotBeReadBlocksNothingAndTheOneBeforeTakesItsPlace) {
  const KeptModels db;
  db.Run("INSERT INTO model_refresh(at) VALUES ('2025-03-03')");
  db.Run("INSERT INTO model_refresh(at) VALUES ('2025-03-04')");
  // Another version's format, and a text edited by hand, of names without a new sound fit.
  db.Run(
      "UPDATE model_fit SET model = replace(model, '\"ladderline_model\":1', "
      "'\"ladderline_model\":0') WHERE name = 'time' AND refresh = 2;"
      "UPDATE model_fit SET model = replace(model, '\"coefficient\":', '\"coefficient\":\"x\"') "
      "WHERE name = 'log time'");
  db.NewSource("SELECT 'time' AS name, NULL AS model");
  db.Run("INSERT INTO model_refresh(at) VALUES ('2025-03-05')");
  EXPECT_EQ(db.Rows("SELECT refresh, name, status FROM model_fit"),
            (Table{{"1", "time", "fitted"},
                   {"1", "log time", "unreadable"},
                   {"2", "time", "unreadable"},
                   {"2", "log time", "unreadable"},
                   {"3", "time", "refused"}}));
  EXPECT_THAT(db.Text("SELECT reason FROM model_fit WHERE name = 'time' AND refresh = 2"),
              ::testing::HasSubstr("its format has version 0, this build reads version 1"));
  EXPECT_EQ(db.Rows("SELECT name, status, fitted_at, refused_since, rows FROM published_model "
                    "ORDER BY name"),
            (Table{{"log time", "lost", {}, "2025-03-03", {}},
                   {"time", "refused", "2025-03-03", "2025-03-04", "60"}}));
  EXPECT_EQ(db.Text("SELECT reason FROM published_model WHERE name = 'log time'"),
            "model_source no longer gives this name; the fit kept last cannot be read");
  EXPECT_EQ(db.Text("SELECT count(DISTINCT name) FROM live_terms"), "1");
  // A build that reads it again takes it up again.
  db.Run(
      "UPDATE model_fit SET model = replace(model, '\"ladderline_model\":0', "
      "'\"ladderline_model\":1')");
  db.Refresh();
  EXPECT_EQ(db.Text("SELECT fitted_at FROM published_model WHERE name = 'time'"), "2025-03-04");
}

TEST(KeepModels, ANameThatNeverHadAModelAndIsLostSaysOneThing) {
  const KeptModels db("CREATE VIEW model_source AS SELECT 'none' AS name, NULL AS model");
  db.Refresh();
  db.NewSource("SELECT 'time' AS name, " + std::string(kTimeModel) + " AS model FROM visit");
  db.Refresh();
  EXPECT_EQ(db.Rows("SELECT status, reason FROM published_model WHERE name = 'none'"),
            (Table{{"lost", "model_source no longer gives this name"}}));
}

// ---- What stops a refresh, and leaves everything as it was ----

TEST(KeepModels, ATimeIsADateOrATimeAndGoesForward) {
  const KeptModels db;
  const auto at = [](const std::string& text) {
    return "INSERT INTO model_refresh(at) VALUES (" + text + ")";
  };
  for (const std::string text :
       {"'yesterday'", "'now'", "''", "12", "2460000.5", "'12:30'", "'2025-13-01'", "'2025-02-30'",
        "'2025-3-1'", "'2025-03-01 25:00'", "'2025-03-01 <b>'", "x'32303235'"})
    EXPECT_EQ(db.ErrorOf(at(text)),
              "model_refresh: at must be a date or a time like 2025-01-31 or 2025-01-31 18:00:00, "
              "in UTC")
        << text;
  // In this order each is the same or later.
  for (const std::string text : {"'2024-02-29'", "'2024-03-01'", "'2024-03-01 09:30'",
                                 "'2024-03-01'", "'2024-03-01T12:30:00+02:00'"})
    EXPECT_EQ(db.ErrorOf(at(text)), "(no error)") << text;
  EXPECT_EQ(db.Text("SELECT group_concat(at, ', ') FROM (SELECT at FROM model_refresh ORDER BY "
                    "refresh)"),
            "2024-02-29, 2024-03-01, 2024-03-01 09:30:00, 2024-03-01, 2024-03-01 10:30:00");
  for (const std::string text :
       {"'2024-02-29'", "'2024-03-01 10:29:59'", "'2024-03-01T10:30+01:00'"})
    EXPECT_THAT(db.ErrorOf(at(text)),
                ::testing::HasSubstr("model_refresh: at is earlier than the last refresh"))
        << text;
  EXPECT_EQ(db.Text("SELECT count(*) FROM model_refresh"), "5");
  EXPECT_EQ(db.ErrorOf(kRefresh), "(no error)");
}

TEST(KeepModels, ARefreshThatFailsSaysWhyAndLosesNothing) {
  const KeptModels db;
  db.Run(
      "CREATE VIEW r AS SELECT 'North' AS area, 2024 AS period, 12 AS events, 100 AS base, "
      "1000 AS per; DROP VIEW rate_source; CREATE VIEW rate_source AS SELECT * FROM r");
  db.Refresh();
  const auto before = ContentsOf(db);
  const auto fails = [&](const std::string& change, const std::string& message) {
    SCOPED_TRACE(change);
    db.Run("SAVEPOINT change; " + change);
    EXPECT_THAT(db.ErrorOf(kRefresh), ::testing::HasSubstr(message));
    db.Run("ROLLBACK TO change; RELEASE change");
    EXPECT_EQ(ContentsOf(db), before);
    // The same without a transaction around it.
    db.Run(
        "CREATE TABLE kept AS SELECT sql FROM sqlite_schema WHERE name IN ('model_source', "
        "'rate_source', 'r')");
    db.Run(change);
    EXPECT_THAT(db.ErrorOf(kRefresh), ::testing::HasSubstr(message));
    const auto views = db.Rows("SELECT sql FROM kept");
    db.Run(
        "DROP VIEW IF EXISTS model_source; DROP VIEW IF EXISTS rate_source; DROP VIEW r;"
        "DROP TABLE kept; INSERT OR IGNORE INTO release_rule VALUES (1, 5)");
    for (const auto& view : views) db.Run(*view[0]);
    EXPECT_EQ(ContentsOf(db), before);
  };
  const auto source = [](const std::string& select) {
    return "DROP VIEW model_source; CREATE VIEW model_source AS " + select;
  };
  const auto rates = [](const std::string& select) {
    return "DROP VIEW r; CREATE VIEW r AS " + select;
  };
  const std::string model = std::string(kTimeModel) + " AS model FROM visit";

  fails("DROP VIEW model_source", "no such table: main.model_source");
  fails(source("SELECT 'time' AS name, ols_model('minutes', minutes, 'stairs', "
               "CASE id WHEN 17 THEN 'n/a' ELSE stairs END) AS model FROM visit"),
        "ols_model: stairs must be a number, got text 'n/a' (row 17); for codes write 'stairs | "
        "category'");
  fails(source("SELECT 'time' AS name, " + model + " GROUP BY 1 HAVING count(*) > 1000"),
        "model_source gives no rows: SELECT name FROM model_source");
  fails(source("SELECT 'time' AS name, " + model + " UNION ALL SELECT 'time', NULL"),
        "model_source gives a name twice: SELECT name, count(*) FROM model_source GROUP BY name "
        "HAVING count(*) > 1");
  for (const std::string name : {"NULL", "''", "'  '", "x'41'"}) {
    fails(source("SELECT " + name + " AS name, " + model),
          "model_source gives a row without a name; every model needs one: SELECT name FROM "
          "model_source");
  }
  for (const std::string name : {"' time'", "'time '", "'time' || char(10)"})
    fails(source("SELECT " + name + " AS name, " + model),
          "model_source gives a name with blanks before or after it");
  fails("DELETE FROM release_rule",
        "release_rule has lost its row: INSERT INTO release_rule VALUES (1, 5)");
  fails("DROP VIEW rate_source", "no such table: main.rate_source");
  fails(
      rates("SELECT 'North' AS area, 1 AS period, 2 AS events, 3 AS base, 1 AS per UNION ALL "
            "SELECT 'North', '1', 2, 3, 1"),
      "rate_source gives an area twice in a period: SELECT area, period, count(*) FROM rate_source "
      "GROUP BY 1, 2 HAVING count(*) > 1");
  fails(rates("SELECT NULL AS area, 1 AS period, 2 AS events, 3 AS base, 1 AS per"),
        "rate_source gives a row without an area: SELECT * FROM rate_source WHERE area IS NULL OR "
        "trim(area) = ''");
  for (const std::string events : {"'n/a'", "50.5", "-1", "9e999"}) {
    fails(
        rates("SELECT 'North' AS area, 1 AS period, " + events + " AS events, 3 AS base, 1 AS per"),
        "rate_source gives a count that is no whole number of at least 0: SELECT * FROM "
        "rate_source WHERE coalesce(number_or_null(events) >= 0 AND number_or_null(events) = "
        "CAST(events AS INTEGER), 0) = 0");
  }
  fails(rates("SELECT 'North' AS area, 1 AS period, 7 AS events, 3 AS base, 0.95 AS per"),
        "rate_per: per must be at least 1");
}

// ---- Rates ----

struct KeptRates : KeptModels {
  // `rates` has the columns of rate_source.
  KeptRates(const std::string& rates, int floor) {
    Run("DROP VIEW rate_source; CREATE VIEW rate_source AS " + rates +
        "; UPDATE release_rule SET floor = " + std::to_string(floor));
    Refresh();
  }
};

TEST(KeepModels, RatesAndRatiosToTheYearBeforeHaveTheLimitsOfR) {
  // rates_r.csv: poisson.test of R's stats package, one sample and two.
  const KeptModels db;
  db.LoadCsv("r", "rates_r.csv");
  db.Run(
      "CREATE VIEW ratio AS SELECT 'area ' || rowid AS area, * FROM r "
      "WHERE kind = 'ratio' AND level = 0.95 AND a > 0;"
      "DROP VIEW rate_source; CREATE VIEW rate_source AS "
      "SELECT area, '2024-03' AS period, a AS events, b AS base, 1 AS per FROM ratio UNION ALL "
      "SELECT area, '2023-03', c, d, 1 FROM ratio UNION ALL "
      "SELECT 'rate ' || rowid, '2024-03', a, b, 1 FROM r "
      "WHERE kind = 'rate' AND level = 0.95 AND a > 0;"
      "UPDATE release_rule SET floor = 1");
  db.Refresh();
  const auto worst = [&](const std::string& published, const std::string& expected,
                         const std::string& join) {
    return db.Number("SELECT max(abs(p." + published + " / e." + expected +
                     " - 1)) FROM published_rates AS p JOIN " + join);
  };
  const std::string of_ratio = "ratio AS e ON p.area = e.area AND p.period = '2024-03'";
  const std::string of_rate = "r AS e ON p.area = 'rate ' || e.rowid";
  for (const auto& [published, expected] : std::map<std::string, std::string>{
           {"ratio", "estimate"}, {"ratio_low", "low"}, {"ratio_high", "high"}, {"ratio_p", "p"}})
    EXPECT_LT(worst(published, expected, of_ratio), 1e-6) << published;
  for (const auto& [published, expected] :
       std::map<std::string, std::string>{{"rate", "estimate"}, {"low", "low"}, {"high", "high"}})
    EXPECT_LT(worst(published, expected, of_rate), 1e-9) << published;
  EXPECT_EQ(db.Rows("SELECT period, count(*), count(ratio) FROM published_rates GROUP BY 1"),
            (Table{{"2023-03", "9", "0"}, {"2024-03", "27", "9"}}));
}

TEST(KeepModels, TheYearBeforeIsFoundByTheYearThatAPeriodBeginsWith) {
  const KeptRates db(
      "SELECT 'North' AS area, column1 AS period, column2 AS events, 10 AS base, 1 AS per FROM "
      "(VALUES (2023, 20), (2024, 30), ('2023-Q4', 40), ('2024-Q4', 20), ('2023-11', 50), "
      "('2024-11', 25), ('2024-12', 25), ('spring', 25), (NULL, 10))",
      5);
  EXPECT_EQ(
      db.Rows("SELECT period, ratio FROM published_rates WHERE ratio IS NOT NULL ORDER BY period"),
      (Table{{"2024", "1.5"}, {"2024-11", "0.5"}, {"2024-Q4", "0.5"}}));
  EXPECT_EQ(db.Text("SELECT rate FROM published_rates WHERE period = ''"), "1");
}

TEST(KeepModels, HiddenCellsCannotBeFoundFromWhatIsPublished) {
  // In 2024 one cell lies under the floor, and a second is hidden with it; Dale is shown in 2023.
  const KeptRates db(
      "SELECT column1 AS area, column2 AS period, column3 AS events, 100 AS base, 10 AS per FROM "
      "(VALUES ('Ash', 2024, 40), ('Brook', 2024, 3), ('Cliff', 2024, 12), ('Dale', 2024, 25), "
      "('Ash', 2023, 30), ('Brook', 2023, 9), ('Cliff', 2023, 8), ('Dale', 2023, 20), "
      "('Ash', 2025, NULL), ('Brook', 2022, 2), ('Ash', 2022, 1))",
      5);
  EXPECT_EQ(db.Rows("SELECT area, hidden, events, base, rate, ratio FROM published_rates "
                    "WHERE period = '2024' ORDER BY area"),
            (Table{{"Ash", "0", "40", "100", "4", "1.3333333333333333"},
                   {"Brook", "1", {}, "100", {}, {}},
                   {"Cliff", "1", {}, "100", {}, {}},
                   {"Dale", "0", "25", "100", "2.5", "1.25"}}));
  EXPECT_EQ(db.Rows("SELECT period, areas, hidden_areas, events, base, rate FROM published_totals "
                    "ORDER BY period"),
            (Table{{"2022", "2", "2", {}, "200", {}},
                   {"2023", "4", "0", "67", "400", "1.675"},
                   {"2024", "4", "2", "80", "400", "2"},
                   {"2025", "0", "0", {}, {}, {}}}));
  // What is left of a total is split in more than one way: each hidden count is one of several.
  EXPECT_EQ(db.Rows("SELECT t.events - sum(p.events), min(p.events), t.hidden_areas "
                    "FROM published_totals AS t JOIN published_rates AS p USING (period) "
                    "WHERE period = '2024'"),
            (Table{{"15", "25", "2"}}));
  EXPECT_EQ(
      db.Text("SELECT count(*) FROM published_rates WHERE hidden AND coalesce(events, rate, low, "
              "high, ratio, ratio_low, ratio_high, ratio_p) IS NOT NULL"),
      "0");
  // A cell that was hidden a year ago gives no ratio either.
  db.Run(
      "DROP VIEW rate_source; CREATE VIEW rate_source AS SELECT 'Ash' AS area, 2023 AS period, 3 "
      "AS "
      "events, 100 AS base, 10 AS per UNION ALL SELECT 'Ash', 2024, 30, 100, 10");
  db.Refresh();
  EXPECT_EQ(db.Rows("SELECT period, hidden, events, ratio FROM published_rates ORDER BY period"),
            (Table{{"2023", "1", {}, {}}, {"2024", "0", "30", {}}}));
}

TEST(KeepModels, TotalsAreOfAreasWithACountAndABase) {
  // 2023: a base of 0 tells that there is no case, so that it hides nothing of the others: of two
  // counts below 5 with a sum of 8 each would be 4, were the threshold not that of the next count.
  const KeptRates db(
      "SELECT column1 AS area, column2 AS period, column3 AS events, column4 AS base, 1000 AS per "
      "FROM (VALUES ('Ash', 2024, 50, 1000), ('Brook', 2024, 50, NULL), ('Cliff', 2024, NULL, "
      "1000), ('Dale', 2024, 50, ''), ('Elm', 2024, 3, NULL), ('Ash', 2023, 0, 0), ('Brook', 2023, "
      "4, 10), ('Cliff', 2023, 4, 10), ('Dale', 2023, 50, 10))",
      5);
  EXPECT_EQ(db.Rows("SELECT period, areas, hidden_areas, events, base, rate FROM published_totals "
                    "ORDER BY period"),
            (Table{{"2023", "3", "3", "58", "30", "1933.3333333333333"},
                   {"2024", "1", "1", "50", "1000", "50"}}));
  EXPECT_EQ(db.Rows("SELECT area, hidden, events FROM published_rates WHERE period = '2024' ORDER "
                    "BY area"),
            (Table{{"Ash", "0", "50"},
                   {"Brook", "0", "50"},
                   {"Cliff", "0", {}},
                   {"Dale", "0", "50"},
                   {"Elm", "1", {}}}));
}

TEST(KeepModels, TheFloorIsAWholeNumberOfAtLeastOne) {
  const KeptModels db;
  for (const std::string floor : {"0", "-1", "2.5", "'five'"})
    EXPECT_EQ(db.ErrorOf("UPDATE release_rule SET floor = " + floor),
              "CHECK constraint failed: floor must be a whole number, at least 1")
        << floor;
  EXPECT_NE(db.ErrorOf("UPDATE release_rule SET floor = NULL"), "(no error)");
  EXPECT_NE(db.ErrorOf("INSERT INTO release_rule VALUES (2, 5)"), "(no error)");
  EXPECT_EQ(db.Text("SELECT floor FROM release_rule"), "5");
}

}  // namespace
}  // namespace ladderline::testing
