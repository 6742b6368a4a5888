// The tables of rows, one per file of functions; registry.cc joins them.
#ifndef LADDERLINE_EXT_FUNCTION_TABLES_H_
#define LADDERLINE_EXT_FUNCTION_TABLES_H_

#include <span>

#include "ext/registry.h"

namespace ladderline {

std::span<const FunctionRow> TransformFunctions();  // transform_functions.cc
std::span<const FunctionRow> RateFunctions();       // rate_functions.cc
std::span<const FunctionRow> AuditFunctions();      // audit_functions.cc
std::span<const FunctionRow> MomentFunctions();     // moment_functions.cc
std::span<const FunctionRow> OrderFunctions();      // order_functions.cc
std::span<const FunctionRow> NormalityFunctions();  // normality_functions.cc
std::span<const FunctionRow> ShapeFunctions();      // shape_functions.cc
std::span<const FunctionRow> LambdaFunctions();     // lambda_functions.cc
std::span<const FunctionRow> ScanFunctions();       // scan_functions.cc
std::span<const FunctionRow> ScanTables();          // scan_tables.cc
std::span<const FunctionRow> OffsetFunctions();     // offset_functions.cc
std::span<const FunctionRow> OlsFunctions();        // ols_functions.cc
std::span<const FunctionRow> ModelFunctions();      // model_functions.cc
std::span<const FunctionRow> ModelTables();         // model_tables.cc
std::span<const FunctionRow> ReportFunctions();     // report_functions.cc
std::span<const FunctionRow> ReleaseFunctions();    // release_functions.cc
std::span<const FunctionRow> ChartFunctions();      // chart_functions.cc
std::span<const FunctionRow> PageFunctions();       // page_functions.cc
std::span<const FunctionRow> HelpFunctions();       // help_functions.cc

// In the order of the function reference.
inline std::vector<std::span<const FunctionRow>> AllFunctions() {
  return {
      TransformFunctions(), RateFunctions(),      AuditFunctions(),  MomentFunctions(),
      OrderFunctions(),     NormalityFunctions(), ShapeFunctions(),  LambdaFunctions(),
      OffsetFunctions(),    ScanFunctions(),      ScanTables(),      OlsFunctions(),
      ModelFunctions(),     ModelTables(),        ReportFunctions(), ReleaseFunctions(),
      ChartFunctions(),     PageFunctions(),      HelpFunctions(),
  };
}

}  // namespace ladderline

#endif  // LADDERLINE_EXT_FUNCTION_TABLES_H_
