/**
 * Mercury, cadmium, zinc, sodium, hydrogen, deuterium and laser lines: rows of the built-in line list, version 2026.1.
 * Columns: element | spectrum | air nm | vacuum nm | uncertainty nm | relative intensity | intensity's source | source | note.
 * What the sources are: docs/line-list.md. A new edition is a new set of files; these rows never change.
 */
export const metalsHydrogenLasersRows = `
Hg|Hg I||184.94994|0.00002|5000|ASD|ASD|ASD flag r: easily self-reversed; ASD ref L3456
Hg|Hg I|237.8324|237.9050|0.0002|4000|ASD|ASD|vac from ASD wavenumber; ASD ref L3456
Hg|Hg I|246.4057|246.4802|0.0004|20|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Hg|Hg I|248.2001|248.2750|0.0002|300|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 248.3815(170) 248.2716(90); ASD ref L3456
Hg|Hg I|248.2716|248.3466|0.0002|90|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 248.2001(300) 248.3815(170); ASD ref L3456
Hg|Hg I|248.3815|248.4565|0.0004|170|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 248.2001(300) 248.2716(90); ASD ref L3451
Hg|Hg I|253.4772|253.5534|0.0002|2000|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 253.6521(900000); ASD ref L3456
Hg|Hg I|253.6521|253.7283|0.0001|900000|ASD|ASD;SSR96|pencil-lamp value; vac from ASD wavenumber; ASD ref L7247
Hg|Hg I|257.6285|257.7057|0.0006|100|ASD|ASD|vac from ASD wavenumber; ASD ref L3451
Hg|Hg I|265.2039|265.2829|0.0006|1600|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 265.3690(6000) 265.5134(400); ASD ref L3451
Hg|Hg I|265.3690|265.4480|0.0002|6000|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 265.2039(1600); ASD ref L3456
Hg|Hg I|265.5134|265.5924|0.0002|400|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 265.3690(6000) 265.2039(1600); ASD ref L3456
Hg|Hg I|269.8828|269.9629|0.0006|200|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 269.9376(100); ASD ref L3451
Hg|Hg I|275.2777|275.3591|0.0002|400|ASD|ASD|vac from ASD wavenumber; ASD ref L3456
Hg|Hg I|275.9705|276.0521|0.0002|10|ASD|ASD|vac from ASD wavenumber; ASD ref L3456
Hg|Hg I|280.3466|280.4292|0.0002|180|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 280.4434(40); ASD ref L3456
Hg|Hg I|280.4434|280.5260|0.0006|40|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 280.3466(180); ASD ref L3451
Hg|Hg I|289.3601|289.4449|0.0001|800|ASD|ASD;SSR96|pencil-lamp value; vac from ASD wavenumber; ASD ref L7247
Hg|Hg I|292.5414|292.6270|0.0002|70|ASD|ASD|vac from ASD wavenumber; ASD ref L3456
Hg|Hg I|296.7283|296.8150|0.0001|3000|ASD|ASD;SSR96|pencil-lamp value; vac from ASD wavenumber; ASD ref L7247
Hg|Hg I|302.1504|302.2384|0.0001|1200|ASD|ASD;SSR96|pencil-lamp value; vac from ASD wavenumber; neighbours <0.5 nm: 302.3471(300); ASD ref L7247
Hg|Hg I|302.3471|302.4351|0.0002|300|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 302.1504(1200) 302.7490(60); ASD ref L3456
Hg|Hg I|302.5606|302.6487|0.0006|30|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 302.1504(1200) 302.3471(300) 302.7490(60); ASD ref L3451
Hg|Hg I|302.7490|302.8371|0.0002|60|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 302.3471(300) 302.5606(30); ASD ref L3456
Hg|Hg I|312.5674|312.6580|0.0001|4000|ASD|ASD;SSR96|pencil-lamp value; vac from ASD wavenumber; ASD ref L7247
Hg|Hg I|313.1555|313.2463|0.0001|3000|ASD|ASD;SSR96|pencil-lamp value; vac from ASD wavenumber; neighbours <0.5 nm: 313.1844(4000); ASD ref L7247
Hg|Hg I|313.1844|313.2752|0.0001|4000|ASD|ASD;SSR96|pencil-lamp value; vac from ASD wavenumber; neighbours <0.5 nm: 313.1555(3000); ASD ref L7247
Hg|Hg I|334.1484|334.2445|0.0001|700|ASD|ASD;SSR96|pencil-lamp value; vac from ASD wavenumber; ASD ref L7247
Hg|Hg I|365.0158|365.1198|0.0001|9000|ASD|ASD;SSR96|pencil-lamp value; vac from ASD wavenumber; neighbours <0.5 nm: 365.4842(3000); ASD ref L7247
Hg|Hg I|365.4842|365.5883|0.0001|3000|ASD|ASD;SSR96|pencil-lamp value; vac from ASD wavenumber; neighbours <0.5 nm: 365.0158(9000); ASD ref L7247
Hg|Hg I|366.2887|366.3930|0.0001|500|ASD|ASD;SSR96|pencil-lamp value; vac from ASD wavenumber; neighbours <0.5 nm: 366.3284(2000); ASD ref L7247
Hg|Hg I|366.3284|366.4327|0.0001|2000|ASD|ASD;SSR96|pencil-lamp value; vac from ASD wavenumber; neighbours <0.5 nm: 366.2887(500); ASD ref L7247
Hg|Hg I|390.6371|390.74775|0.0008|40|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 390.1868(30); ASD ref L3451
Hg|Hg I|404.6565|404.7708|0.0001|12000|ASD|ASD;SSR96|pencil-lamp value; vac from ASD wavenumber; ASD ref L7247
Hg|Hg I|407.7837|407.8988|0.0001|1000|ASD|ASD;SSR96|pencil-lamp value; vac from ASD wavenumber; ASD ref L7247
Hg|Hg I|410.8054|410.92132|0.0008|70|ASD|ASD|vac computed PR72; ASD ref L3451
Hg|Hg I|433.92232|434.04431|0.0001|50|ASD|ASD|vac computed PR72; ASD ref L3451
Hg|Hg I|434.74945|434.87166|0.0001|150|ASD|ASD|ASD value from Burns et al. type measurement; for pencil lamps use 434.7506; vac computed PR72; ASD ref L3451
Hg|Hg I|434.7506|434.87281|0.0001|||SSR96-K|pencil-lamp value; read only as quoted in two public line lists; uncertainty from the paper abstract; vac computed PR72
Hg|Hg I|435.8335|435.9560|0.0001|12000|ASD|ASD;SSR96|pencil-lamp value; vac from ASD wavenumber; ASD ref L7247
Hg|Hg I|491.6068|491.74405|0.001|20|ASD|ASD|vac computed PR72; obs-Ritz +2.3 pm; ASD ref L3451
Hg|Hg I|496.017|496.15542|0.004|100|ASD|ASD|Ritz value used (better known); observed 496.01 +/- 0.01; vac computed PR72; ASD ref L1310c86
Hg|Hg I|512.0637|512.2064|0.0005|70|ASD|ASD|vac from ASD wavenumber; ASD ref L3499
Hg|Hg I|535.4034|535.55230|0.0014|130|ASD|ASD|vac computed PR72; ASD ref L11984
Hg|Hg I|546.0750|546.2268|0.0001|6000|ASD|ASD;SSR96|pencil-lamp value; vac from ASD wavenumber; ASD ref L7247
Hg|Hg I|567.588|567.74550|0.004|600|ASD|ASD|Ritz value used (better known); observed 567.581 +/- 0.008; vac computed PR72; ASD ref L7588
Hg|Hg I|576.9610|577.1210|0.0001|1000|ASD|ASD;SSR96|pencil-lamp value; vac from ASD wavenumber; ASD ref L7247
Hg|Hg I|578.96805|579.12860|0.00023|30|ASD|ASD|Ritz value used (better known); observed 578.969 +/- 0.005; vac computed PR72; neighbours <0.5 nm: 579.0670(900); ASD ref L15226
Hg|Hg I|579.0670|579.2276|0.0001|900|ASD|ASD;SSR96|pencil-lamp value; vac from ASD wavenumber; ASD ref L7247
Hg|Hg I|580.3782|580.5391|0.0005|400|ASD|ASD|vac from ASD wavenumber; ASD ref L3499
Hg|Hg I|585.9254|586.0878|0.0005|130|ASD|ASD|vac from ASD wavenumber; ASD ref L3499
Hg|Hg I|607.264|607.43213|0.010|30|ASD|ASD|vac computed PR72; obs-Ritz -2.0 pm; ASD ref L7394
Hg|Hg I|623.435|623.60747|0.005|50|ASD|ASD|Ritz value used (better known); observed 623.436 +/- 0.010; vac computed PR72; ASD ref L7394,L7589
Hg|Hg I|671.634|671.81942|0.010|600|ASD|ASD|vac computed PR72; obs-Ritz -2.0 pm; ASD ref L7394
Hg|Hg I|690.746|690.93656|0.004|1000|ASD|ASD|Ritz value used (better known); observed 690.746 +/- 0.011; vac computed PR72; ASD ref L7394
Hg|Hg I|708.1901|708.3854|0.0005|1000|ASD|ASD|vac from ASD wavenumber; ASD ref L3499
Hg|Hg I|709.1860|709.3815|0.0005|800|ASD|ASD|vac from ASD wavenumber; ASD ref L3499
Hg|Hg I|772.8825|773.0952|0.0005|30|ASD|ASD|vac from ASD wavenumber; ASD ref L3499
Hg|Hg I|1013.9787|1014.25664|0.0007|1600|ASD|ASD|Ritz value used (better known); observed 1013.975 +/- 0.005; vac computed PR72; ASD ref L7591
Hg|Hg I|1128.7451|1129.05417|0.0011|1000|ASD|ASD|Ritz value used (better known); observed 1128.71 +/- 0.04; vac computed PR72; ASD ref L7592
Hg|Hg I|1357.081|1357.45208|0.004|200|ASD|ASD|Ritz value used (better known); observed 1357.021 +/- 0.02; vac computed PR72; ASD ref L3502
Hg|Hg I|1367.339|1367.71287|0.003|300|ASD|ASD|Ritz value used (better known); observed 1367.351 +/- 0.02; vac computed PR72; ASD ref L3502
Hg|Hg I|1395.0484|1395.42980|0.0023|200|ASD|ASD|Ritz value used (better known); observed 1395.055 +/- 0.02; vac computed PR72; ASD ref L3502
Hg|Hg I|1529.545|1529.96297|0.009|600|ASD|ASD|Ritz value used (better known); observed 1529.582 +/- 0.02; vac computed PR72; ASD ref L3502
Hg|Hg I|1692.016|1692.47816|0.02|1600|ASD|ASD|vac computed PR72; obs-Ritz -11.0 pm; ASD ref L3502
Hg|Hg II||194.22729|0.00004|750000|ASD|ASD|ASD flag E: overexposed in the cited work; ASD ref L11760
Hg|Hg II|226.22226|226.29227|0.00006|750000|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 226.02942(600000); ASD ref L11760
Hg|Hg II|284.7675|284.8512|0.0001|3.5e+06|ASD|ASD|vac from ASD wavenumber; ASD ref L11760
Hg|Hg II|398.39312|398.50580|0.00003|1e+07|ASD|ASD|vac from ASD wavenumber; ASD flag c: complex structure; ASD ref L11760
Hg|Hg II|614.9475|615.1177|0.0001|2.5e+07|ASD|ASD|vac from ASD wavenumber; ASD flag c: complex structure; ASD ref L11760
Hg|Hg II|794.4555|794.6740|0.0002|2.5e+07|ASD|ASD|vac from ASD wavenumber; ASD ref L11760
H|H I|383.5397|383.64851|0.0006|30000|ASD|ASD|H eta; vac computed PR72; ASD ref L7436c29
H|H I|388.9064|389.01660|0.0006|70000|ASD|ASD|H zeta; vac computed PR72; ASD ref L7436c29
H|H I|397.0075|397.11982|0.0006|30000|ASD|ASD|H epsilon; vac computed PR72; ASD ref L7436c29
H|H I|410.1734|410.28916|0.0006|70000|ASD|ASD|H delta; vac computed PR72; ASD ref L7436c29
H|H I|434.0472|434.16923|0.0006|90000|ASD|ASD|H gamma; vac computed PR72; ASD ref L7436c29
H|H I|486.1333|486.26910|0.0003|180000|ASD|ASD|H beta; Ritz centre of gravity used; observed 486.135 +/- 0.005; vac computed PR72; ASD ref L7439c30
H|H I|656.279|656.46029|0.003|500000|ASD|ASD|H alpha; Ritz centre of gravity 656.2819 +/- 0.0007: 2.9 pm longer, fine structure; vac computed PR72; ASD ref L7400c29
H|H I|954.5969|954.85875|0.0006|9000|ASD|ASD|Pa epsilon; Ritz centre of gravity used; observed 954.62 +/- 0.10; vac computed PR72; ASD ref L7389
H|H I|1004.9369|1005.21239|0.0007|13000|ASD|ASD|Pa delta; Ritz centre of gravity used; observed 1004.98 +/- 0.10; vac computed PR72; ASD ref L7389
H|H I|1093.817|1094.11659|0.013|14000|ASD|ASD|Pa gamma; vac computed PR72; ASD ref L7421
H|H I|1281.8072|1282.15783|0.0008|32000|ASD|ASD|Pa beta; vac computed PR72; ASD ref L7421
D|D I|410.0618|410.17755||||DERIVED|D delta; H I value 410.1734 scaled by the reduced-mass ratio; published rounded value 410.06 (DLIST)
D|D I|433.9291|434.05112||||DERIVED|D gamma; H I value 434.0472 scaled by the reduced-mass ratio; published rounded value 433.93 (DLIST)
D|D I|486.0011|486.13682||||DERIVED|D beta; H I value 486.1333 scaled by the reduced-mass ratio; published rounded value 486.00 (DLIST); Ph. Eur. prints 486.0
D|D I|656.1005|656.28171||||DERIVED|D alpha; H I value 656.279 scaled by the reduced-mass ratio; published rounded value 656.10 (DLIST); D2-lamp check point 656.1
Na|Na I|285.2811|285.3648|0.0004|16|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 285.3013(15); ASD ref L6096
Na|Na I|285.3013|285.3849|0.0004|15|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 285.2811(16); ASD ref L6096
Na|Na I|330.2369|330.33198|0.0005|19|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 330.2979(18); ASD ref L6096
Na|Na I|330.2979|330.39300|0.0005|18|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 330.2369(19); ASD ref L6096
Na|Na I|497.85414|497.99305|0.00005|1|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 498.28134(2); ASD ref L15039
Na|Na I|498.28134|498.42036|0.00005|2|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 497.85414(1); ASD ref L15039
Na|Na I|514.88381|515.02684|0.00005|1|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 515.34024(2); ASD ref L15039
Na|Na I|515.34024|515.48339|0.00005|2|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 514.88381(1); ASD ref L15039
Na|Na I|568.26333|568.42062|0.00005|5|ASD|ASD|vac from ASD wavenumber; ASD ref L15039
Na|Na I|568.82046|568.97790|0.00005|9|ASD|ASD|vac from ASD wavenumber; ASD ref L15039
Na|Na I|588.995095|589.158326|0.000003|80000|ASD|ASD|vac from ASD wavenumber; ASD ref L5918
Na|Na I|589.592424|589.755815|0.000003|40000|ASD|ASD|vac from ASD wavenumber; ASD ref L5918
Na|Na I|615.42253|615.59247|0.00005|1|ASD|ASD|vac from ASD wavenumber; ASD ref L15039
Na|Na I|616.07470|616.24482|0.00005|2|ASD|ASD|vac from ASD wavenumber; ASD ref L15039
Na|Na I|818.32556|818.55024|0.00005|5|ASD|ASD|vac from ASD wavenumber; ASD ref L15039
Na|Na I|819.48237|819.70736|0.00005|9|ASD|ASD|vac from ASD wavenumber; ASD ref L15039
Na|Na I|1138.1441|1138.45572|0.0004|11|ASD|ASD|Ritz value used (better known); observed 1138.145 +/- 0.003; vac computed PR72; ASD ref L6096
Na|Na I|1140.3766|1140.68883|0.0004|12|ASD|ASD|Ritz value used (better known); observed 1140.378 +/- 0.003; vac computed PR72; ASD ref L6096
Cd|Cd I|228.80225|228.87282||1500|ASD|ASD|vac from ASD wavenumber; ASD flag r: easily self-reversed; ASD ref L3486
Cd|Cd I|283.68999|283.77342||200|ASD|ASD|vac from ASD wavenumber; ASD ref L3486
Cd|Cd I|288.07670|288.16121||200|ASD|ASD|vac from ASD wavenumber; ASD flag r: easily self-reversed; neighbours <0.5 nm: 288.12245(50); ASD ref L3486
Cd|Cd I|298.06204|298.14902||1000|ASD|ASD|vac from ASD wavenumber; ASD flag r: easily self-reversed; neighbours <0.5 nm: 298.13625(200); ASD ref L3486
Cd|Cd I|313.31666|313.40746||200|ASD|ASD|vac from ASD wavenumber; ASD ref L3486
Cd|Cd I|325.25240|325.34622||300|ASD|ASD|vac computed PR72; ASD ref L3486
Cd|Cd I|326.10548|326.19951||300|ASD|ASD|vac computed PR72; ASD ref L3486
Cd|Cd I|340.36521|340.46287||800|ASD|ASD|vac computed PR72; ASD ref L3486
Cd|Cd I|346.61996|346.71923||1000|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 346.76547(800); ASD ref L3486
Cd|Cd I|346.76547|346.86477||800|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 346.61996(1000); ASD ref L3486
Cd|Cd I|361.05077|361.15375||1000|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 361.28729(800); ASD ref L3486
Cd|Cd I|361.28729|361.39033||800|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 361.05077(1000); ASD ref L3486
Cd|Cd I|361.44529|361.54837||60|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 361.05077(1000) 361.28729(800); ASD ref L3486
Cd|Cd I|466.23520|466.36572||8|ASD|ASD|vac computed PR72; ASD ref L3486
Cd|Cd I|467.81493|467.94587||200|ASD|ASD|vac computed PR72; ASD ref L3486
Cd|Cd I|479.99123|480.12540||300|ASD|ASD|vac computed PR72; ASD ref L3486
Cd|Cd I|508.58217|508.72393||1000|ASD|ASD|vac computed PR72; ASD flag w: wide; ASD ref L3486
Cd|Cd I|609.91421|610.08305||300|ASD|ASD|vac computed PR72; ASD ref L3486
Cd|Cd I|611.1495|611.31867||100|ASD|ASD|vac computed PR72; ASD ref L3486
Cd|Cd I|632.51661|632.69151||100|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 633.00133(30); ASD ref L3486
Cd|Cd I|643.84695|644.02490||2000|ASD|ASD|vac computed PR72; ASD ref L3486
Cd|Cd I|734.56704|734.76941||1000|ASD|ASD|vac computed PR72; ASD ref L3486
Cd|Cd II|214.43943|214.50697||1000|ASD|ASD|vac from ASD wavenumber; ASD flag r: easily self-reversed; ASD ref L3486,L3540
Cd|Cd II|226.50145|226.57152||1000|ASD|ASD|vac from ASD wavenumber; ASD ref L3486,L3540
Cd|Cd II|231.2766|231.3477||1000|ASD|ASD|vac from ASD wavenumber; ASD ref L3540
Cd|Cd II|274.85558|274.93686||1000|ASD|ASD|vac from ASD wavenumber; ASD ref L3486,L3540
Cd|Cd II|325.03240|325.12616||150|ASD|ASD|vac computed PR72; obs-Ritz +3.1 pm; ASD ref L3486,L3540
Cd|Cd II|441.56859|441.69260||1000|ASD|ASD|vac computed PR72; obs-Ritz +3.6 pm; ASD ref L3486,L3540
Cd|Cd II|533.74855|533.89701||1000|ASD|ASD|vac computed PR72; ASD ref L3486,L3540
Cd|Cd II|537.81351|537.96306||1000|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 538.1887(200); ASD ref L3486,L3540
Cd|Cd II|635.9982|636.1740||500|ASD|ASD|vac from ASD wavenumber; unresolved blend of 2 components; ASD ref L3540
Zn|Zn I|213.857351|213.924775|0.000010|8e+07|ASD|ASD|vac from ASD wavenumber; ASD flag r: easily self-reversed; ASD ref L9761
Zn|Zn I|277.085377|277.167194|0.000015|1e+06|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 277.097397(580000); ASD ref L9761
Zn|Zn I|280.086346|280.168894|0.000016|1.1e+06|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 280.105001(530000); ASD ref L9761
Zn|Zn I|307.589713|307.679073|0.000021|88000|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 307.20627(180000); ASD ref L9761
Zn|Zn I|328.232559|328.327131|0.000022|360000|ASD|ASD|vac computed PR72; ASD ref L9761
Zn|Zn I|330.258289|330.353376|0.000022|1.4e+06|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 330.293949(550000); ASD ref L9761
Zn|Zn I|330.293949|330.389045|0.000022|550000|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 330.258289(1400000); ASD ref L9761
Zn|Zn I|334.501339|334.597506|0.000022|2.9e+06|ASD|ASD|vac computed PR72; ASD ref L9761
Zn|Zn I|334.556939|334.653121|0.000022|530000|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 334.501339(2900000); ASD ref L9761
Zn|Zn I|334.59353|334.68972|0.00003|75000|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 334.501339(2900000) 334.556939(530000); ASD ref L9761
Zn|Zn I|429.28836|429.40913|0.00008|32000|ASD|ASD|vac computed PR72; ASD ref L9761
Zn|Zn I|429.83249|429.95341|0.00006|49000|ASD|ASD|vac computed PR72; ASD ref L9761
Zn|Zn I|462.980810|463.110471|0.000022|390000|ASD|ASD|vac computed PR72; ASD ref L9761
Zn|Zn I|468.013590|468.144583|0.000022|540000|ASD|ASD|vac computed PR72; ASD ref L9761
Zn|Zn I|472.215690|472.347796|0.000022|1e+06|ASD|ASD|vac computed PR72; ASD ref L9761
Zn|Zn I|481.053210|481.187658|0.000023|1.1e+06|ASD|ASD|vac computed PR72; ASD ref L9761
Zn|Zn I|518.19819|518.34251|0.00006|120000|ASD|ASD|vac from ASD wavenumber; ASD ref L9761
Zn|Zn I|577.2050|577.36507|0.0004|490000|ASD|ASD|Ritz value used (better known); observed 577.210 +/- 0.005; vac computed PR72; neighbours <0.5 nm: 577.550(210000); ASD ref L3284
Zn|Zn I|623.7896|623.9622|0.0003|93000|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 623.9169(38000); ASD ref L4741,L3284
Zn|Zn I|636.23458|636.41048|0.00004|240000|ASD|ASD|vac from ASD wavenumber; ASD ref L9761
Zn|Zn I|647.9184|648.0974|0.0003|55000|ASD|ASD|vac from ASD wavenumber; ASD ref L4741,L3284
Zn|Zn I|692.8316|693.02272|0.0013|40000|ASD|ASD|vac computed PR72; obs-Ritz +2.1 pm; ASD ref L3284
Zn|Zn I|1105.4249|1105.72764|0.0006|170000|ASD|ASD|vac computed PR72; ASD ref L4741,L3498
Zn|Zn I|1305.3638|1305.72083|0.0005|140000|ASD|ASD|Ritz value used (better known); observed 1305.363 +/- 0.005; vac computed PR72; ASD ref L4741,L3498
Zn|Zn II|202.54845|202.61370||500|ASD|ASD|vac from ASD wavenumber; ASD ref L9761,L640
Zn|Zn II|206.20011|206.26604||500|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 206.42266(200); ASD ref L9761,L640
Zn|Zn II|250.19945|250.27486||1000|ASD|ASD|vac from ASD wavenumber; ASD ref L9761,L640
Zn|Zn II|255.79460|255.87132||1000|ASD|ASD|vac from ASD wavenumber; ASD ref L9761,L640
Zn|Zn II|491.16269|491.29982||800|ASD|ASD|vac computed PR72; obs-Ritz +1.7 pm; ASD ref L9761,L45
Zn|Zn II|492.40132|492.53878||500|ASD|ASD|vac computed PR72; ASD ref L9761,L45
Zn|Zn II|610.249|610.41793||500|ASD|ASD|vac computed PR72; ASD ref L45
laser|He-Cd 325.0|325.03240|325.12616||||ASD|Cd II transition; ASD Ritz value 325.0293 differs by 3.1 pm; isotope structure of natural Cd spreads the line by several pm: treat as +/- 0.005 nm
laser|He-Cd 441.6|441.56859|441.69260||||ASD|Cd II transition; ASD Ritz value 441.565 differs by 3.6 pm; isotope structure of natural Cd spreads the line by several pm: treat as +/- 0.005 nm
laser|Ar+ 488.0|487.98634|488.12262|0.00001|||ASD|Ar II transition wavelength
laser|Ar+ 515 I2-stabilised a3 P(13) 43-0|514.530123|514.673466||||MEMORY|from memory (CIPM list of recommended radiations; not read in any source here); air computed PR72
laser|Ar+ 514.5|514.53080|514.67415|0.00001|||ASD|Ar II transition wavelength
laser|Nd:YAG doubled free-running 532|532.07|532.21802|0.05|||MEMORY|from memory; nominal only; sources read give just 532 nm; vac computed PR72
laser|Nd:YAG doubled I2-stabilised a10 R(56) 32-0|532.097013|532.245036||||MEMORY|from memory (CIPM list of recommended radiations; not read in any source here); air computed PR72
laser|HeNe green|543.36513|543.51616|0.00004|||ASD|Ne I transition wavelength; a free-running laser sits within its gain width (about 1 pm) of it; vac from ASD wavenumber
laser|HeNe green I2-stabilised a9 R(12) 26-0|543.365304|543.516333||||MEMORY|from memory (CIPM list of recommended radiations; not read in any source here); air computed PR72
laser|HeNe yellow|593.9317|594.0962||||ASD-RITZ|computed here from the ASD Ne I levels 166656.5114 and 149824.2215 cm-1 (2s2.2p5.(2P*<3/2>).3p 2[5/2] J=2); the line is sold as 594 nm
laser|HeNe orange 605|604.61348|604.78090|0.00004|||ASD|Ne I transition wavelength; a free-running laser sits within its gain width (about 1 pm) of it; vac from ASD wavenumber
laser|HeNe orange I2-stabilised a7 R(47) 9-2|611.801426|611.970770||||MEMORY|from memory (CIPM list of recommended radiations; not read in any source here); air computed PR72
laser|HeNe orange 612|611.80187|611.97121|0.00040|||ASD|Ne I transition wavelength; a free-running laser sits within its gain width (about 1 pm) of it; vac from ASD wavenumber
laser|HeNe 629|629.37447|629.54853|0.00004|||ASD|Ne I transition wavelength; a free-running laser sits within its gain width (about 1 pm) of it; vac from ASD wavenumber
laser|HeNe red unstabilised (CIPM 2007)|632.81582|632.9908|0.00095|||CIPM07|relative standard uncertainty 1.5e-6, any isotopic mix, 3s2-2p4 only; air computed PR72
laser|HeNe red I2-stabilised a16 R(127) 11-5|632.816229|632.99121258|0.000000013|||MEP633|relative standard uncertainty 2.1e-11; value is in vacuum; air computed PR72
laser|HeNe red (Ne I line centre)|632.81646|632.99144|0.00004|||ASD|Ne I transition wavelength; a free-running laser sits within its gain width (about 1 pm) of it; vac from ASD wavenumber
laser|HeNe 635|635.18532|635.36095|0.00040|||ASD|Ne I transition wavelength; a free-running laser sits within its gain width (about 1 pm) of it; vac from ASD wavenumber
laser|HeNe 640|640.1076|640.28439|0.0020|||ASD|Ne I transition wavelength; a free-running laser sits within its gain width (about 1 pm) of it; vac from ASD wavenumber
laser|Nd:YAG free-running 1064|1064.15|1064.44154|0.1|||MEMORY|from memory; nominal only, moves with crystal temperature and mode; not a calibration value; sources read give just 1064 nm; vac computed PR72
laser|Nd:YAG I2-locked fundamental|1064.198514|1064.490072||||MEMORY|twice the 532 nm value; from memory (CIPM list of recommended radiations; not read in any source here); air computed PR72
`;
