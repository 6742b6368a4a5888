-- Predictions in euros for open cases, with limits and notes, and totals.
--
-- Needs:  repair (make_database.sql), cost_model (05_cost_model.sql) and the extension.
-- Leaves: nothing.

.print
.print 'Open cases in euros: typical is the middle value to expect, mean the average, and nine of ten'
.print 'such cases should cost between case_low and case_high.'
SELECT case_id, district, trade, dwellings, building_age AS age,
       CAST(round(typical) AS INTEGER) AS typical, CAST(round(mean) AS INTEGER) AS mean,
       CAST(round(case_low) AS INTEGER) AS case_low, CAST(round(case_high) AS INTEGER) AS case_high
FROM repair, cost_model, model_predictions(model, 0.9, dwellings, building_age, trade, district)
WHERE closed IS NULL ORDER BY case_id LIMIT 6;

.print
.print 'A row that the model cannot speak for says so in its note, by name and value.'
WITH asked(dwellings, age, trade, district) AS (
  VALUES (4, 35, 'Damp', 'Corvane'), (4, NULL, 'Damp', 'Corvane'), (4, 212, 'Damp', 'Corvane'),
         (4, 35, 'Chimneys', 'Corvane')
)
SELECT asked.*, CAST(round(typical) AS INTEGER) AS typical, note
FROM asked, cost_model, model_predictions(model, 0.9, dwellings, age, trade, district);

.print
.print 'Totals: add up fitted_mean only. fitted_typical is a middle value, and middles do not add up.'
SELECT count(*) AS closed_cases, round(sum(cost)) AS cost_in_fact,
       round(sum(fitted_mean(model, dwellings, building_age, trade, district)))    AS sum_of_means,
       round(sum(fitted_typical(model, dwellings, building_age, trade, district))) AS sum_of_typicals
FROM repair, cost_model WHERE cost IS NOT NULL AND building_age IS NOT NULL;

.print
.print 'So the open cases will cost about this much; cases that lack an age are counted apart.'
SELECT count(*) AS open_cases,
       count(*) FILTER (WHERE fit_note(model, dwellings, building_age, trade, district) IS NOT NULL)
         AS with_a_note,
       round(sum(fitted_mean(model, dwellings, building_age, trade, district))) AS expected_cost
FROM repair, cost_model WHERE closed IS NULL;
