/**
 * Neon: rows of the built-in line list, version 2026.1.
 * Columns: element | spectrum | air nm | vacuum nm | uncertainty nm | relative intensity | intensity's source | source | note.
 * What the sources are: docs/line-list.md. A new edition is a new set of files; these rows never change.
 */
export const neonRows = `
Ne|Ne I|336.98076|337.07756|0.00005|5000|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 336.99069(7000); ASD ref L3451
Ne|Ne I|336.99069|337.08749|0.00005|7000|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 336.98076(5000); ASD ref L3451
Ne|Ne I|341.79031|341.88834|0.00005|5000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|344.77022|344.86901|0.00005|2000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|345.41942|345.51838|0.00005|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|346.05235|346.15147|0.00005|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 346.43385; ASD ref L3451
Ne|Ne I|346.43385|346.53307|0.00005|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 346.05235 346.65781; ASD ref L3451
Ne|Ne I|346.65781|346.75709|0.00005|2000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 346.43385; ASD ref L3451
Ne|Ne I|347.25706|347.35649|0.00005|5000|ASD|ASD|vac computed PR72; ASD ref L3451
Ne|Ne I|349.80632|349.90640|0.00005|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 350.12154; ASD ref L3451
Ne|Ne I|350.12154|350.22171|0.00005|2000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 349.80632; ASD ref L3451
Ne|Ne I|351.51900|351.61952|0.00005|2000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|352.04714|352.14780|0.00005|10000|ASD|ASD|vac computed PR72; ASD ref L3451
Ne|Ne I|359.35263|359.45517|0.00005|5000|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 359.36385(3000); ASD ref L3451
Ne|Ne I|359.36385|359.46639|0.00004|3000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 359.35263; ASD ref L5951
Ne|Ne I|360.01694|360.11965|0.00005|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|363.36643|363.47001|0.00005|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|368.22421|368.32904|0.00005|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 368.57351; ASD ref L3451
Ne|Ne I|368.57351|368.67843|0.00005|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 368.22421; ASD ref L3451
Ne|Ne I|413.10613|413.22266|0.00020|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L4498
Ne|Ne I|417.43667|417.55433|0.00020|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L4498
Ne|Ne I|419.81018|419.92846|0.00020|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L4498
Ne|Ne I|426.80086|426.92098|0.00020|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 426.97223; ASD ref L4498
Ne|Ne I|426.97223|427.09240|0.00020|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 426.80086; ASD ref L4498
Ne|Ne I|427.55590|427.67622|0.00020|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L4498
Ne|Ne I|430.62508|430.74621|0.00020|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L4498
Ne|Ne I|433.41267|433.53453|0.00004|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|436.3524|436.4750|0.0001|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L7292
Ne|Ne I|442.25205|442.37624|0.00004|3000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 442.48065 442.54000; ASD ref L3451
Ne|Ne I|442.48065|442.60490|0.00020|3000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 442.25205 442.54000; ASD ref L4498
Ne|Ne I|442.5400|442.6643|0.0001|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 442.25205 442.48065; ASD ref L7292
Ne|Ne I|443.37239|443.49687|0.00004|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|446.0175|446.1427|0.0001|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L7292
Ne|Ne I|446.68120|446.80656|0.00004|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|447.5656|447.6912|0.0001|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L7292
Ne|Ne I|448.3190|448.4448|0.0001|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 448.80926; ASD ref L7292
Ne|Ne I|448.80926|448.93518|0.00004|3000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 448.31900 449.17716; ASD ref L3451
Ne|Ne I|449.17716|449.30317|0.00020|800|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 448.80926; ASD ref L4498
Ne|Ne I|451.7736|451.9003|0.0001|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L7292
Ne|Ne I|452.5764|452.7033|0.0001|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L7292
Ne|Ne I|453.63003|453.75722|0.00020|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 453.76768 453.77545 453.83026; ASD ref L4498
Ne|Ne I|453.76768|453.89491|0.00020|3000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 453.63003 453.77545 453.83026; ASD ref L4498
Ne|Ne I|453.77545|453.90268|0.00004|10000|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 453.76768(3000) 453.83026(3000); ASD ref L3451
Ne|Ne I|453.83026|453.95750|0.00020|3000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 453.63003 453.76768 453.77545; ASD ref L4498
Ne|Ne I|457.50620|457.63441|0.00004|3000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|458.2035|458.3319|0.0001|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 458.24521; ASD ref L7292
Ne|Ne I|458.24521|458.37362|0.00004|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 458.20350; ASD ref L3451
Ne|Ne I|460.9910|461.1201|0.0001|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 461.43910; ASD ref L7292
Ne|Ne I|461.4391|461.5684|0.0001|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 460.99100 461.78370; ASD ref L7292
Ne|Ne I|461.7837|461.9130|0.0001|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 461.43910; ASD ref L7292
Ne|Ne I|462.83113|462.96075|0.00004|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|463.6125|463.7423|0.0001|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 463.66362; ASD ref L7292
Ne|Ne I|463.66362|463.79346|0.00020|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 463.61250; ASD ref L4498
Ne|Ne I|464.54180|464.67187|0.00004|3000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 464.99040; ASD ref L3451
Ne|Ne I|464.9904|465.1206|0.0001|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 464.54180; ASD ref L7292
Ne|Ne I|465.63936|465.76972|0.00004|3000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 466.11054; ASD ref L3451
Ne|Ne I|466.11054|466.24103|0.00004|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 465.63936; ASD ref L3451
Ne|Ne I|466.73643|466.86709|0.00020|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 467.08840; ASD ref L4498
Ne|Ne I|467.0884|467.2191|0.0001|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 466.73643; ASD ref L7292
Ne|Ne I|467.8218|467.9527|0.0001|3000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 467.91350 468.03670; ASD ref L7292
Ne|Ne I|467.9135|468.0445|0.0001|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 467.82180 468.03670; ASD ref L7292
Ne|Ne I|468.03670|468.16770|0.00020|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 467.82180 467.91350; ASD ref L4498
Ne|Ne I|468.7671|468.8983|0.0001|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L7292
Ne|Ne I|470.25305|470.38464|0.00020|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 470.43949; ASD ref L4498
Ne|Ne I|470.43949|470.57113|0.00004|15000|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 470.88594(12000); ASD ref L3451
Ne|Ne I|470.88594|471.01769|0.00020|12000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 470.43949 471.00650 471.20633; ASD ref L4498
Ne|Ne I|471.00650|471.13829|0.00020|10000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 470.88594 471.20633 471.43397; ASD ref L4498
Ne|Ne I|471.20633|471.33817|0.00020|15000|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 471.5344(15000) 470.88594(12000) 471.00650(10000); ASD ref L4498
Ne|Ne I|471.43397|471.56587|0.00020|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 471.00650 471.20633 471.53440 471.76085; ASD ref L4498
Ne|Ne I|471.5344|471.6663|0.0001|15000|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 471.20633(15000); ASD ref L7292
Ne|Ne I|471.76085|471.89284|0.00020|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 471.43397 471.53440 472.15337; ASD ref L4498
Ne|Ne I|472.15337|472.28546|0.00020|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 471.76085 472.51450; ASD ref L4498
Ne|Ne I|472.5145|472.6467|0.0001|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 472.15337; ASD ref L7292
Ne|Ne I|474.95754|475.09037|0.00004|3000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 475.27320; ASD ref L3451
Ne|Ne I|475.27320|475.40612|0.00004|5000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 474.95754; ASD ref L3451
Ne|Ne I|475.8728|476.0059|0.0001|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L7292
Ne|Ne I|478.0338|478.1674|0.0001|3000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L7292
Ne|Ne I|478.89258|479.02645|0.00010|10000|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 479.02195(5000); ASD ref L7292
Ne|Ne I|478.95982|479.09371|0.00020|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 478.89258 479.02195; ASD ref L4498
Ne|Ne I|479.02195|479.15586|0.00020|5000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 478.89258 478.95982; ASD ref L4498
Ne|Ne I|481.00640|481.14084|0.00004|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 481.06392; ASD ref L3451
Ne|Ne I|481.06392|481.19837|0.00020|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 481.00640; ASD ref L4498
Ne|Ne I|481.76386|481.89850|0.00004|3000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 481.87847 482.19218; ASD ref L3451
Ne|Ne I|481.87847|482.01314|0.00020|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 481.76386 482.19218 482.31725; ASD ref L4498
Ne|Ne I|482.19218|482.32693|0.00020|3000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 481.76386 481.87847 482.31725; ASD ref L4498
Ne|Ne I|482.31725|482.45203|0.00020|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 481.87847 482.19218 482.73380 482.75870; ASD ref L4498
Ne|Ne I|482.7338|482.8687|0.0001|10000|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 482.7587(3000); ASD ref L7292
Ne|Ne I|482.7587|482.8936|0.0001|3000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 482.31725 482.73380; ASD ref L7292
Ne|Ne I|483.73139|483.86655|0.00004|5000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|485.2655|485.4011|0.0001|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L7292
Ne|Ne I|486.30810|486.44394|0.00020|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 486.55065 486.64760 486.70189; ASD ref L4498
Ne|Ne I|486.55065|486.68656|0.00020|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 486.30810 486.64760 486.70189 486.82766; ASD ref L4498
Ne|Ne I|486.6476|486.7835|0.0001|800|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 486.30810 486.55065 486.70189 486.82766; ASD ref L7292
Ne|Ne I|486.70189|486.83784|0.00020|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 486.30810 486.55065 486.64760 486.82766; ASD ref L4498
Ne|Ne I|486.82766|486.96364|0.00020|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 486.55065 486.64760 486.70189; ASD ref L4498
Ne|Ne I|488.49170|488.62812|0.00004|10000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|488.50971|488.64614|0.00020|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 488.49170; ASD ref L4498
Ne|Ne I|489.2090|489.3456|0.0001|5000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L7292
Ne|Ne I|492.8235|492.9611|0.0001|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L7292
Ne|Ne I|493.9041|494.0420|0.0001|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L7292
Ne|Ne I|494.4987|494.6367|0.0001|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L7292
Ne|Ne I|495.53905|495.67734|0.0002|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 495.70335 495.71220; ASD ref L4498
Ne|Ne I|495.70335|495.84169|0.00004|10000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 495.53905 495.71220; ASD ref L3451
Ne|Ne I|495.7122|495.8505|0.0001|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 495.53905 495.70335; ASD ref L7292
Ne|Ne I|497.35555|497.49433|0.00020|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L4498
Ne|Ne I|499.4930|499.6323|0.0001|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L7292
Ne|Ne I|500.51587|500.65548|0.00004|5000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|503.13484|503.27515|0.00010|2500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L7292
Ne|Ne I|503.77512|503.91560|0.00004|5000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|508.0383|508.1799|0.0001|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L7292
Ne|Ne I|511.36724|511.50974|0.00004|750|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 511.65032; ASD ref L3451
Ne|Ne I|511.65032|511.79290|0.00004|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 511.36724; ASD ref L3451
Ne|Ne I|512.22565|512.36838|0.00004|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 512.23613; ASD ref L3451
Ne|Ne I|512.23613|512.37886|0.00030|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 512.22565; ASD ref L4498
Ne|Ne I|514.49384|514.63717|0.00004|5000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|515.19610|515.33962|0.00004|750|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|518.86122|519.00572|0.00004|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 519.31251 519.32240; ASD ref L3451
Ne|Ne I|519.31251|519.45713|0.00030|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 518.86122 519.32240; ASD ref L4498
Ne|Ne I|519.3224|519.4670|0.0001|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 518.86122 519.31251; ASD ref L7292
Ne|Ne I|520.38962|520.53452|0.00004|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 520.88648; ASD ref L3451
Ne|Ne I|520.88648|521.03152|0.00004|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 520.38962; ASD ref L3451
Ne|Ne I|529.81891|529.96633|0.00004|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|530.47580|530.62339|0.00004|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|532.6396|532.7878|0.0001|750|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 533.07775; ASD ref L7292
Ne|Ne I|533.07775|533.22603|0.00004|6000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|534.10938|534.25794|0.00004|10000|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 534.32834(6000); ASD ref L3451
Ne|Ne I|534.32834|534.47696|0.00004|6000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 534.10938; ASD ref L3451
Ne|Ne I|534.92038|535.06916|0.00004|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|535.51640|535.66534|0.00030|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 535.54236 536.00121; ASD ref L4498
Ne|Ne I|535.54236|535.69130|0.00030|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 535.51640 536.00121; ASD ref L4498
Ne|Ne I|536.00121|536.15027|0.00004|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 535.51640 535.54236; ASD ref L3451
Ne|Ne I|537.23110|537.38049|0.00004|750|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|540.05616|540.20631|0.00004|20000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|541.26490|541.41537|0.00004|2500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|541.85584|542.00647|0.00004|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|543.36513|543.51616|0.00004|2500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|544.85091|545.00234|0.00004|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|553.36788|553.52158|0.00004|750|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|556.24416|556.39863|0.00030|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 556.27662 556.30531; ASD ref L4498
Ne|Ne I|556.27662|556.43110|0.00004|5000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 556.24416 556.30531; ASD ref L3451
Ne|Ne I|556.30531|556.45980|0.00030|750|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 556.24416 556.27662; ASD ref L4498
Ne|Ne I|565.25664|565.41352|0.00004|750|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 565.60258 565.66588; ASD ref L3451
Ne|Ne I|565.60258|565.75955|0.00030|750|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 565.25664 565.66588; ASD ref L4498
Ne|Ne I|565.66588|565.82287|0.00004|5000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 565.25664 565.60258; ASD ref L3451
Ne|Ne I|566.25489|566.41204|0.00004|750|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|568.98163|569.13950|0.00004|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|571.88798|572.04663|0.00030|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 571.92248 571.95300; ASD ref L4498
Ne|Ne I|571.92248|572.08114|0.00004|5000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 571.88798 571.95300; ASD ref L3451
Ne|Ne I|571.95300|572.11167|0.00030|750|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 571.88798 571.92248; ASD ref L4498
Ne|Ne I|574.82985|574.98929|0.00004|5000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 574.86446; ASD ref L3451
Ne|Ne I|574.86446|575.02391|0.00030|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 574.82985; ASD ref L4498
Ne|Ne I|576.05885|576.21862|0.00004|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 576.44188; ASD ref L3451
Ne|Ne I|576.44188|576.60175|0.00004|7000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|580.40900|580.56993|0.00030|750|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 580.44496; ASD ref L4498
Ne|Ne I|580.44496|580.60590|0.00004|5000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 580.40900; ASD ref L3451
Ne|Ne I|581.14066|581.30179|0.00004|3000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|582.01558|582.17694|0.00004|5000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|582.89063|583.05223|0.00030|750|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L4498
Ne|Ne I|585.24878|585.41101|0.00005|20000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Ne|Ne I|586.84165|587.00430|0.00030|750|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 587.21450 587.28275; ASD ref L4498
Ne|Ne I|587.21450|587.37725|0.00030|750|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 586.84165 587.28275; ASD ref L4498
Ne|Ne I|587.28275|587.44552|0.00004|5000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 586.84165 587.21450; ASD ref L3451
Ne|Ne I|588.18950|588.35251|0.00005|10000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Ne|Ne I|591.3633|591.5272|0.0001|2500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L7292
Ne|Ne I|591.89068|592.05469|0.00004|2500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|593.44522|593.60964|0.00040|750|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L4498
Ne|Ne I|594.48340|594.64810|0.00005|5000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Ne|Ne I|596.16228|596.32743|0.00004|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 596.54710; ASD ref L3451
Ne|Ne I|596.54710|596.71235|0.00004|5000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|597.46273|597.62823|0.00004|5000|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 597.55343(6000); ASD ref L3451
Ne|Ne I|597.55343|597.71895|0.00005|6000|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 597.46273(5000); ASD ref L7292
Ne|Ne I|598.79074|598.95660|0.00004|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 599.16477; ASD ref L3451
Ne|Ne I|599.16477|599.33073|0.00040|750|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 598.79074; ASD ref L4498
Ne|Ne I|600.09275|600.25895|0.00004|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|602.99968|603.16666|0.00005|10000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Ne|Ne I|607.43376|607.60193|0.00005|10000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Ne|Ne I|609.61630|609.78506|0.00005|3000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Ne|Ne I|612.84498|613.01460|0.00004|1000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|614.30627|614.47629|0.00005|10000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Ne|Ne I|615.02985|615.20006|0.00040|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L4498
Ne|Ne I|616.35937|616.52994|0.00005|10000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Ne|Ne I|617.48829|617.65916|0.00004|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|618.21460|618.38567|0.00004|1500|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|618.90649|619.07774|0.00004|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|620.57775|620.74945|0.00004|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|621.38758|621.55950|0.00004|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 621.72812; ASD ref L3451
Ne|Ne I|621.72812|621.90013|0.00005|10000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Ne|Ne I|624.67294|624.84574|0.00004|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|625.87884|626.05196|0.00040|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L4498
Ne|Ne I|626.64952|626.82285|0.00005|10000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Ne|Ne I|627.30141|627.47491|0.00040|700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L4498
Ne|Ne I|629.37447|629.54853|0.00004|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|630.47893|630.65329|0.00005|1000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Ne|Ne I|631.36855|631.54314|0.00040|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L4498
Ne|Ne I|632.81646|632.99144|0.00004|3000|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 633.08894(1500); ASD ref L3451
Ne|Ne I|633.08894|633.26400|0.00040|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 632.81646 633.44276; ASD ref L4498
Ne|Ne I|633.44276|633.61791|0.00005|10000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Ne|Ne I|635.18532|635.36094|0.00040|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L4498
Ne|Ne I|636.49963|636.67560|0.00040|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L4498
Ne|Ne I|638.29914|638.47559|0.00005|10000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Ne|Ne I|640.2248|640.4018|0.0001|20000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Ne|Ne I|640.97469|641.15186|0.00040|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L4498
Ne|Ne I|642.17044|642.34794|0.00040|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L4498
Ne|Ne I|644.47118|644.64929|0.00004|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|650.65277|650.83254|0.00005|15000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Ne|Ne I|653.28824|653.46872|0.00005|1000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Ne|Ne I|659.89528|660.07754|0.00005|10000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Ne|Ne I|660.29007|660.47244|0.00040|1000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 659.89528; ASD ref L4498
Ne|Ne I|665.20925|665.39294|0.00004|1500|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|667.82766|668.01205|0.00005|5000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Ne|Ne I|671.70430|671.88974|0.00005|700|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Ne|Ne I|692.94672|693.13787|0.00004|100000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|702.40500|702.59870|0.00004|34000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|703.24128|703.43521|0.00004|85000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|705.12922|705.32365|0.00008|2200|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L9097
Ne|Ne I|705.91079|706.10543|0.00004|10000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|717.39380|717.59154|0.00004|77000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|724.51665|724.71631|0.00004|77000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|743.88981|744.09469|0.00004|60000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|747.24383|747.44962|0.00004|3100|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|748.88712|749.09335|0.00004|32000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|753.57739|753.78488|0.00004|28000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|754.40439|754.61210|0.00004|13000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|793.69957|793.91789|0.00009|1300|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L9097
Ne|Ne I|794.31805|794.53654|0.00004|7900|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|808.24576|808.46801|0.00004|5700|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|811.85495|812.07818|0.00004|3800|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|812.89110|813.11461|0.00009|1200|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L9097
Ne|Ne I|813.64061|813.86432|0.00004|17000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|825.93795|826.16498|0.00004|3300|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|826.60769|826.83491|0.00009|7200|ASD|ASD|vac from ASD wavenumber; ASD ref L9097
Ne|Ne I|826.71166|826.93890|0.00004|990|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 826.60769; ASD ref L3451
Ne|Ne I|830.03248|830.26062|0.00004|29000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|830.15570|830.38387|0.00009|1900|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 830.03248; ASD ref L9097
Ne|Ne I|836.57464|836.80455|0.00004|4600|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|837.63590|837.86610|0.00009|6600|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 837.76070; ASD ref L9097
Ne|Ne I|837.76070|837.99093|0.00010|76000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Ne|Ne I|841.71597|841.94727|0.00009|2700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 841.84265; ASD ref L9097
Ne|Ne I|841.84265|842.07398|0.00004|26000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|846.33569|846.56824|0.00004|3700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|848.44424|848.67736|0.00004|1300|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|849.53591|849.76932|0.00004|69000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|854.46952|854.70427|0.00004|1600|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|857.13535|857.37082|0.00004|2900|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L3451
Ne|Ne I|858.29031|858.52609|0.00009|1600|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L9097
Ne|Ne I|859.12583|859.36183|0.00004|41000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|863.46472|863.70190|0.00004|35000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|863.53177|863.76897|0.00010|740|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 863.46472; ASD ref L9097
Ne|Ne I|864.70412|864.94164|0.00009|6000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L9097
Ne|Ne I|865.43828|865.67599|0.00009|64000|ASD|ASD|vac from ASD wavenumber; ASD ref L9097
Ne|Ne I|865.55220|865.78995|0.00009|7600|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 865.43828; ASD ref L9097
Ne|Ne I|867.94936|868.18775|0.00010|13000|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 868.19216(15000); ASD ref L9097
Ne|Ne I|868.19216|868.43062|0.00004|15000|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 867.94936(13000); ASD ref L3451
Ne|Ne I|870.41122|870.65028|0.00010|2900|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L9097
Ne|Ne I|877.16575|877.40664|0.00010|10000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L9097
Ne|Ne I|877.87322|878.11430|0.00010|2100|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 878.06223; ASD ref L9097
Ne|Ne I|878.06223|878.30336|0.00004|57000|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 878.37539(43000); ASD ref L3451
Ne|Ne I|878.37539|878.61660|0.00004|43000|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 878.06223(57000); ASD ref L3451
Ne|Ne I|885.38669|885.62980|0.00004|27000|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Ne|Ne I|886.53057|886.77399|0.00004|2100|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 886.57562; ASD ref L3451
Ne|Ne I|886.57562|886.81905|0.00004|15000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 886.53057; ASD ref L3451
Ne|Ne I|891.95007|892.19496|0.00010|6400|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L9097
Ne|Ne I|898.85564|899.10240|0.00010|1800|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L9097
Ne|Ne I|914.86720|915.11829|0.00010|12000|ASD|ASD|vac from ASD wavenumber; ASD ref L9097
Ne|Ne I|920.17588|920.42841|0.00010|8900|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L9097
Ne|Ne I|922.00598|922.25900|0.00010|6000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 922.15802; ASD ref L9097
Ne|Ne I|922.15802|922.41108|0.00010|2200|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 922.00598; ASD ref L9097
Ne|Ne I|922.66910|922.92230|0.00010|1800|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L9097
Ne|Ne I|927.55191|927.80643|0.00010|910|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L9097
Ne|Ne I|930.08532|930.34053|0.00010|7700|ASD|ASD|vac from ASD wavenumber; ASD ref L9097
Ne|Ne I|931.05833|931.31380|0.00010|830|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 931.39731; ASD ref L9097
Ne|Ne I|931.39731|931.65288|0.00010|2700|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; neighbours <0.5 nm: 931.05833; ASD ref L9097
Ne|Ne I|932.65072|932.90663|0.00010|6900|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L9097
Ne|Ne I|937.33079|937.58796|0.00010|1500|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L9097
Ne|Ne I|942.53797|942.79655|0.00010|4800|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L9097
Ne|Ne I|945.92110|946.18060|0.00010|2800|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L9097
Ne|Ne I|948.66825|948.92849|0.00010|5000|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L9097
Ne|Ne I|953.41640|953.67793|0.00010|6100|ASD|ASD|vac from ASD wavenumber; ASD ref L9097
Ne|Ne I|954.74052|955.00241|0.00010|2800|ASD|ASD|weaker line, listed so that it is not taken for another; vac computed PR72; ASD ref L9097
Ne|Ne I|966.54200|966.80709|0.00005|18000|ASD|ASD|vac from ASD wavenumber; ASD ref L7433
Ne|Ne I|1079.80430|1080.10009|0.00005|6100|ASD|ASD|vac computed PR72; ASD ref L7433
Ne|Ne I|1084.44774|1084.74479|0.00005|9400|ASD|ASD|vac computed PR72; ASD ref L7433
Ne|Ne I|1114.30200|1114.60715|0.00005|26000|ASD|ASD|vac computed PR72; ASD ref L7433
Ne|Ne I|1117.75246|1118.05855|0.00005|49000|ASD|ASD|vac computed PR72; ASD ref L7433
Ne|Ne I|1139.04333|1139.35519|0.00005|15000|ASD|ASD|vac computed PR72; ASD ref L7433
Ne|Ne I|1152.27450|1152.58996|0.00014|33000|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 1152.50203(17000); ASD ref L9097
Ne|Ne I|1152.50203|1152.81755|0.00014|17000|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 1152.27450(33000); ASD ref L9097
Ne|Ne I|1176.67929|1177.00137|0.00005|15000|ASD|ASD|vac computed PR72; ASD ref L7433
Ne|Ne I|1206.63343|1206.96364|0.00005|23000|ASD|ASD|vac computed PR72; ASD ref L7433
Ne|Ne I|1291.20141|1291.55459|0.00014|8400|ASD|ASD|vac computed PR72; ASD ref L9097
Ne|Ne I|1523.07144|1523.48765|0.00017|5300|ASD|ASD|vac computed PR72; ASD ref L9097
`;
