/**
 * Helium, argon, krypton and xenon: rows of the built-in line list, version 2026.1.
 * Columns: element | spectrum | air nm | vacuum nm | uncertainty nm | relative intensity | intensity's source | source | note.
 * What the sources are: docs/line-list.md. A new edition is a new set of files; these rows never change.
 */
export const nobleGasesRows = `
Ar|Ar I|394.8979|395.00966||35|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 394.7505(7); ASD ref L2634
Ar|Ar I|404.4418|404.55606||50|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|415.8590|415.97625||400|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|418.1884|418.30626||50|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|419.0713|419.18939||100|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 419.1029(50); ASD ref L2634
Ar|Ar I|419.8317|419.94999||200|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 420.0674(400); ASD ref L2634
Ar|Ar I|420.0674|420.18575||400|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 419.8317(200); ASD ref L2634
Ar|Ar I|425.9362|426.05609||200|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|426.6286|426.74868||100|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|427.2169|427.33713||150|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|430.0101|430.13106||100|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|433.3561|433.47794||100|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 433.5338(50); ASD ref L2634
Ar|Ar I|451.0733|451.19981||100|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|518.7746|518.91907||20|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|549.5874|549.74009||25|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|555.8702|556.02457||25|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|560.6733|560.82895||35|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|565.0704|565.22723||20|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|591.2085|591.37232||50|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|603.2127|603.37974||70|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|604.3223|604.48964||35|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|641.6307|641.8081||70|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|667.7282|667.9125||100|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|675.2834|675.4698||150|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|687.1289|687.3185||150|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|693.7664|693.9578||50|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|696.5431|696.7352||10000|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|703.0251|703.2190||150|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|706.7218|706.9167||10000|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|714.7042|714.9012||1000|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|720.6980|720.8966||70|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|727.2936|727.4940||2000|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|737.2118|737.4149||200|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|738.3980|738.6014||10000|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|750.3869|750.5935||20000|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|751.4652|751.6721||15000|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|763.5106|763.7208||25000|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|772.3761|772.5887||15000|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 772.4207(10000); ASD ref L2634
Ar|Ar I|772.4207|772.6333||10000|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 772.3761(15000); ASD ref L2634
Ar|Ar I|794.8176|795.0362||20000|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|800.6157|800.8359||20000|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|801.4786|801.6990||25000|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|810.3693|810.5921||20000|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|811.5311|811.7543||35000|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|826.4522|826.6794||10000|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|840.8210|841.0521||15000|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|842.4648|842.6963||20000|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|852.1442|852.3783||15000|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|866.7944|867.0325||4500|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|912.2967|912.5471||35000|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|922.4499|922.7030||15000|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|935.4220|935.6786||1600|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|965.7786|966.0435||25000|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|978.4503|978.7186||4500|ASD|ASD|vac from ASD wavenumber; ASD ref L2634
Ar|Ar I|1047.0054|1047.29230||1600|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1067.3565|1067.64891||200|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1148.8109|1149.12542||400|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1166.8710|1167.19042||200|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1211.2326|1211.56406||200|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1240.2827|1240.62205||200|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1243.9321|1244.27244||200|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1248.7663|1249.10796||200|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1270.2281|1270.57559||150|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1280.2739|1280.62411||200|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1295.6659|1296.02030||500|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1300.8264|1301.18220||200|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1322.8107|1323.17247||200|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 1323.090(100); ASD ref L2634
Ar|Ar I|1327.264|1327.62698||500|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1331.3210|1331.68508||1000|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1336.7111|1337.07665||1000|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1350.4191|1350.78837||1000|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1362.2659|1362.63839||400|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1367.8550|1368.22901||200|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1371.8577|1372.23280||1000|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1409.3640|1409.74929||200|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1504.650|1505.06120||100|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar I|1694.058|1694.52072||500|ASD|ASD|vac computed PR72; ASD ref L2634
Ar|Ar II|434.80635|434.92858|0.00001|1995|ASD|ASD|vac from ASD wavenumber; ASD ref L11520
Ar|Ar II|454.50516|454.63258|0.00001|1738|ASD|ASD|vac from ASD wavenumber; ASD ref L11520
Ar|Ar II|457.93493|458.06326|0.00001|871|ASD|ASD|vac from ASD wavenumber; ASD ref L11520
Ar|Ar II|460.95669|461.08581|0.00001|2291|ASD|ASD|vac from ASD wavenumber; ASD ref L11520
Ar|Ar II|465.79009|465.92049|0.00001|1445|ASD|ASD|vac from ASD wavenumber; ASD ref L11520
Ar|Ar II|472.68681|472.81904|0.00001|23442|ASD|ASD|vac from ASD wavenumber; ASD ref L11520
Ar|Ar II|476.48644|476.61967|0.00001|2344|ASD|ASD|vac from ASD wavenumber; ASD ref L11520
Ar|Ar II|480.60202|480.73634|0.00001|1820|ASD|ASD|vac from ASD wavenumber; ASD ref L11520
Ar|Ar II|484.78095|484.91638|0.00001|832|ASD|ASD|vac from ASD wavenumber; ASD ref L11520
Ar|Ar II|487.98634|488.12262|0.00001|2239|ASD|ASD|vac from ASD wavenumber; ASD ref L11520
Ar|Ar II|496.50794|496.64649|0.00001|891|ASD|ASD|vac from ASD wavenumber; ASD ref L11520
Ar|Ar II|501.71626|501.85620|0.00001|7413|ASD|ASD|vac from ASD wavenumber; ASD ref L11520
Ar|Ar II|514.53080|514.67415|0.00001|162|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 514.17826(224); ASD ref L11520
Kr|Kr I|427.396943|427.517220||1000|ASD|ASD|vac computed PR72; ASD ref L11281
Kr|Kr I|431.85524|431.97669||400|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 431.95795(1000); ASD ref L4054
Kr|Kr I|431.95795|432.07943||1000|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 431.85524(400); ASD ref L4054
Kr|Kr I|436.264157|436.386767||500|ASD|ASD|vac computed PR72; ASD ref L11281
Kr|Kr I|437.612159|437.735124||800|ASD|ASD|vac computed PR72; ASD ref L11281
Kr|Kr I|439.996634|440.120227||200|ASD|ASD|vac computed PR72; ASD ref L11281
Kr|Kr I|445.391749|445.516765||600|ASD|ASD|vac computed PR72; ASD ref L11281
Kr|Kr I|446.369000|446.494273||800|ASD|ASD|vac computed PR72; ASD ref L11281
Kr|Kr I|450.235427|450.361721||600|ASD|ASD|vac computed PR72; ASD ref L11281
Kr|Kr I|556.222534|556.376997||500|ASD|ASD|vac computed PR72; ASD ref L11281
Kr|Kr I|557.028944|557.183623||2000|ASD|ASD|vac computed PR72; ASD ref L11281
Kr|Kr I|558.038729|558.193678||80|ASD|ASD|vac computed PR72; ASD ref L11281
Kr|Kr I|564.956177|565.112975||100|ASD|ASD|vac computed PR72; ASD ref L11281
Kr|Kr I|583.285661|583.447363||100|ASD|ASD|vac computed PR72; ASD ref L11281
Kr|Kr I|587.091599|587.254320||3000|ASD|ASD|vac computed PR72; ASD ref L11281
Kr|Kr I|605.612628|605.780312||60|ASD|ASD|vac computed PR72; ASD ref L11281
Kr|Kr I|642.102700|642.280178||100|ASD|ASD|vac computed PR72; ASD ref L11281
Kr|Kr I|645.628888|645.807313||200|ASD|ASD|vac computed PR72; ASD ref L11281
Kr|Kr I|690.46787|690.65836||100|ASD|ASD|vac from ASD wavenumber; ASD ref L11281
Kr|Kr I|722.4103|722.6094||100|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Kr|Kr I|728.7262|728.9270||80|ASD|ASD|vac from ASD wavenumber; ASD ref L7408
Kr|Kr I|742.554|742.75852||60|ASD|ASD|vac computed PR72; ASD ref L7408
Kr|Kr I|748.6862|748.8924||100|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Kr|Kr I|758.74136|758.95025||1000|ASD|ASD|vac from ASD wavenumber; ASD ref L11281
Kr|Kr I|760.15457|760.36384||2000|ASD|ASD|vac from ASD wavenumber; ASD ref L11281
Kr|Kr I|768.52459|768.73612||400|ASD|ASD|vac from ASD wavenumber; ASD ref L11281
Kr|Kr I|769.45401|769.66579||500|ASD|ASD|vac from ASD wavenumber; ASD ref L11281
Kr|Kr I|774.6828|774.8960||50|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Kr|Kr I|785.48233|785.69843||200|ASD|ASD|vac from ASD wavenumber; ASD ref L11281
Kr|Kr I|791.34251|791.56020||50|ASD|ASD|vac from ASD wavenumber; ASD ref L11281
Kr|Kr I|805.95048|806.17211||100|ASD|ASD|vac from ASD wavenumber; ASD ref L11281
Kr|Kr I|810.43660|810.65945||4000|ASD|ASD|vac computed PR72; ASD ref L6099
Kr|Kr I|811.29012|811.51320||500|ASD|ASD|vac from ASD wavenumber; ASD ref L11281
Kr|Kr I|819.00566|819.23082||300|ASD|ASD|vac from ASD wavenumber; ASD ref L11281
Kr|Kr I|826.32426|826.55140||400|ASD|ASD|vac from ASD wavenumber; ASD ref L11281
Kr|Kr I|828.10522|828.33284||200|ASD|ASD|vac from ASD wavenumber; ASD ref L11281
Kr|Kr I|829.81099|830.03907||500|ASD|ASD|vac from ASD wavenumber; ASD ref L11281
Kr|Kr I|850.88728|851.12106||200|ASD|ASD|vac from ASD wavenumber; ASD ref L11281
Kr|Kr I|877.67505|877.91608||300|ASD|ASD|vac from ASD wavenumber; ASD ref L11281
Kr|Kr I|892.86933|893.11446||200|ASD|ASD|vac from ASD wavenumber; ASD ref L11281
Kr|Kr I|975.17610|975.44352||5|ASD|ASD|vac from ASD wavenumber; ASD ref L11281
Kr|Kr I|985.624|985.89426||500|ASD|ASD|vac computed PR72; obs-Ritz -7.5 pm; ASD ref L6099
Kr|Kr I|1087.490|1087.78788||150|ASD|ASD|vac computed PR72; obs-Ritz -2.0 pm; ASD ref L125
Kr|Kr I|1125.7704|1126.07866||130|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 1125.916(50); ASD ref L9760
Kr|Kr I|1145.7477|1146.06138||220|ASD|ASD|vac computed PR72; ASD ref L9760
Kr|Kr I|1181.93785|1182.26136||1800|ASD|ASD|vac computed PR72; ASD ref L4205c2
Kr|Kr I|1199.7102|1200.03853||350|ASD|ASD|vac computed PR72; ASD ref L9760
Kr|Kr I|1220.45357|1220.78754||840|ASD|ASD|vac computed PR72; obs-Ritz +13.6 pm; ASD ref L4205c2
Kr|Kr I|1287.886|1288.23828||470|ASD|ASD|Ritz value used: observed 1287.874 +/- ? (ASD) lies -12 pm off, and Rao 1966 agrees with Ritz to 0.1 A; vac computed PR72; ASD ref L125
Kr|Kr I|1317.74110|1318.10149||310|ASD|ASD|vac computed PR72; ASD ref L4205c2
Kr|Kr I|1362.24164|1362.61413||130|ASD|ASD|vac computed PR72; ASD ref L4205c2
Kr|Kr I|1363.42206|1363.79487||250|ASD|ASD|vac computed PR72; ASD ref L4205c2
Kr|Kr I|1373.88555|1374.26120||51|ASD|ASD|vac computed PR72; ASD ref L4205c2
Kr|Kr I|1442.67927|1443.07362||350|ASD|ASD|vac computed PR72; ASD ref L4205c2
Kr|Kr I|1473.44415|1473.84687||100|ASD|ASD|vac computed PR72; ASD ref L4205c2
Kr|Kr I|1496.1891|1496.59800||290|ASD|ASD|vac computed PR72; ASD ref L9760
Kr|Kr I|1523.96223|1524.37868||160|ASD|ASD|vac computed PR72; ASD ref L4205c2
Kr|Kr I|1533.49672|1533.91576||200|ASD|ASD|vac computed PR72; ASD ref L4205c2
Kr|Kr I|1537.2041|1537.62415||725|ASD|ASD|vac computed PR72; ASD ref L9760
Kr|Kr I|1547.4033|1547.82613||150|ASD|ASD|vac computed PR72; ASD ref L9760
Kr|Kr I|1678.51329|1678.97178||320|ASD|ASD|vac computed PR72; ASD ref L4205c2
Kr|Kr I|1685.34981|1685.81016||170|ASD|ASD|vac computed PR72; ASD ref L4205c2
Kr|Kr I|1689.04538|1689.50674||340|ASD|ASD|vac computed PR72; ASD ref L4205c2
Kr|Kr I|1689.67647|1690.13800||400|ASD|ASD|vac computed PR72; ASD ref L4205c2
Kr|Kr I|1693.58134|1694.04393||280|ASD|ASD|vac computed PR72; ASD ref L4205c2
Xe|Xe I|396.75411|396.86636|0.00005|200|ASD|ASD|vac computed PR72; ASD ref L7292
Xe|Xe I|407.88202|407.99718|0.00005|100|ASD|ASD|vac computed PR72; ASD ref L7292
Xe|Xe I|419.3528|419.4710|0.0002|150|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|450.0978|450.2241|0.0002|||ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|452.46805|452.59493|0.00005|||ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|458.27472|458.40314|0.00005|||ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|462.42756|462.55708|0.00005|||ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|467.12258|467.25334|0.00005|||ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|469.0970|469.2283|0.0002|100|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|473.41518|473.54760|0.00005|600|ASD|ASD|vac from ASD wavenumber; ASD ref L7292c110
Xe|Xe I|479.2619|479.3959|0.0002|150|ASD|ASD|vac from ASD wavenumber; ASD ref L7292c110
Xe|Xe I|480.70190|480.83625|0.00005|500|ASD|ASD|vac from ASD wavenumber; ASD ref L7292c110
Xe|Xe I|482.9708|483.1058|0.0002|400|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|484.32934|484.46466|0.00005|300|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|491.6507|491.7880|0.0002|500|ASD|ASD|vac from ASD wavenumber; ASD ref L7292c110
Xe|Xe I|492.3152|492.4526|0.0002|500|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|502.82794|502.96817|0.00005|200|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|582.3890|582.5505|0.0002|300|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 582.4800(150); ASD ref L7292
Xe|Xe I|617.8303|618.0013|0.0002|150|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 618.2420(300) 617.9665(120); ASD ref L7292
Xe|Xe I|618.2420|618.4131|0.0002|300|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 617.8303(150) 617.9665(120); ASD ref L7292
Xe|Xe I|631.8062|631.9809|0.0002|500|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|646.9705|647.1493|0.0002|300|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 647.2841(150); ASD ref L7292
Xe|Xe I|647.2841|647.4630|0.0002|150|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 646.9705(300); ASD ref L7292
Xe|Xe I|666.8920|667.0762|0.0002|150|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 666.6965(60); ASD ref L7292
Xe|Xe I|672.8008|672.9865|0.0002|200|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|682.7315|682.9199|0.0002|200|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|688.2155|688.4054|0.0002|300|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|711.9598|712.1561|0.0002|500|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|739.3793|739.5829|0.0002|150|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|758.4680|758.6768|0.0002|200|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|764.2024|764.4127|0.0002|500|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 764.391(100); ASD ref L7292c110
Xe|Xe I|788.7393|788.9563|0.0002|300|ASD|ASD|vac from ASD wavenumber; ASD ref L7292c110
Xe|Xe I|796.7342|796.9533|0.0002|500|ASD|ASD|vac from ASD wavenumber; ASD ref L7292c110
Xe|Xe I|805.7258|805.9474|0.0002|200|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 806.1339(150); ASD ref L7292
Xe|Xe I|820.6336|820.8592|0.0002|700|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|823.16336|823.38964|0.00005|10000|ASD|ASD|vac from ASD wavenumber; ASD flag hfs: hyperfine structure; ASD ref L7292
Xe|Xe I|826.6520|826.8792|0.0002|500|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|828.01162|828.23921|0.00005|7000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292c110
Xe|Xe I|834.68217|834.91157|0.00005|2000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|840.91894|841.15002|0.00005|2000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292c110
Xe|Xe I|881.94106|882.18324|0.00005|5000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292c110
Xe|Xe I|895.22509|895.47086|0.00005|1000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292c110
Xe|Xe I|904.54466|904.79295|0.00005|400|ASD|ASD|vac from ASD wavenumber; ASD ref L7292c110
Xe|Xe I|916.26520|916.51667|0.00005|500|ASD|ASD|vac from ASD wavenumber; neighbours <0.5 nm: 916.752(100); ASD ref L7292
Xe|Xe I|937.476|937.73321|0.002|100|ASD|ASD|vac computed PR72; ASD ref L4739
Xe|Xe I|951.3377|951.5987|0.0002|200|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|979.9697|980.2384|0.0002|2000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|992.3198|992.5919|0.0002|3000|ASD|ASD|vac from ASD wavenumber; ASD ref L7292
Xe|Xe I|1052.7857|1053.07416|0.0003|900|ASD|ASD|vac computed PR72; ASD ref L9760
Xe|Xe I|1083.834|1084.13088|0.003|1000|ASD|ASD|vac computed PR72; ASD ref L7293
Xe|Xe I|1089.5324|1089.83083|0.0004|870|ASD|ASD|vac computed PR72; ASD ref L9760
Xe|Xe I|1108.5237|1108.82728|0.0004|1900|ASD|ASD|vac computed PR72; ASD ref L9760
Xe|Xe I|1112.7189|1113.02362|0.0004|375|ASD|ASD|vac computed PR72; ASD ref L9760
Xe|Xe I|1174.2236|1174.54501|0.0004|1750|ASD|ASD|vac computed PR72; ASD ref L9760
Xe|Xe I|1262.340|1262.68534|0.003|5|ASD|ASD|vac computed PR72; ASD ref L7293
Xe|Xe I|1365.706|1366.07943||150|ASD|ASD|Ritz value used: observed 1365.648 +/- 0.01 (ASD) lies -58 pm off, and Rao 1966 agrees with Ritz to 0.1 A; vac computed PR72; ASD ref L7384
Xe|Xe I|1414.245|1414.63162||80|ASD|ASD|Ritz value used: observed 1414.209 +/- 0.01 (ASD) lies -36 pm off, and Rao 1966 agrees with Ritz to 0.1 A; vac computed PR72; ASD ref L7384
Xe|Xe I|1473.281|1473.68367||200|ASD|ASD|Ritz value used: observed 1473.238 +/- 0.01 (ASD) lies -43 pm off, and Rao 1966 agrees with Ritz to 0.1 A; vac computed PR72; ASD ref L7384
Xe|Xe I|1541.840|1542.26131||110|ASD|ASD|Ritz value used: observed 1541.801 +/- 0.01 (ASD) lies -39 pm off, and Rao 1966 agrees with Ritz to 0.1 A; vac computed PR72; ASD ref L7384
Xe|Xe I|1672.8158|1673.27274|0.0008|5000|ASD|ASD|vac computed PR72; ASD ref L9760
He|He I|294.5106|294.5967||10|ASD|ASD|vac from ASD wavenumber; unresolved blend of 3 components; ASD ref L14925c72
He|He I|318.7745|318.86668||20|ASD|ASD|vac computed PR72; unresolved blend of 2 components; ASD ref L14925c72
He|He I|361.3643|361.46736||3|ASD|ASD|vac computed PR72; ASD ref L14925c72
He|He I|381.96074|382.06914|0.00008|10|ASD|ASD|vac computed PR72; unresolved blend of 5 components; ASD ref L14926
He|He I|388.8648|388.97499||500|ASD|ASD|vac computed PR72; unresolved blend of 2 components; ASD ref L14925c72
He|He I|396.47291|396.58509||20|ASD|ASD|vac computed PR72; ASD ref L14926
He|He I|402.61914|402.73292||50|ASD|ASD|vac computed PR72; unresolved blend of 5 components; ASD ref L14926
He|He I|412.08154|412.19780|0.00012|12|ASD|ASD|vac computed PR72; unresolved blend of 2 components; ASD ref L14926
He|He I|414.3761|414.49296||3|ASD|ASD|vac computed PR72; ASD ref L14925c72
He|He I|438.79296|438.91624|0.00006|10|ASD|ASD|vac computed PR72; ASD ref L14926
He|He I|447.14802|447.27350|0.00015|200|ASD|ASD|vac computed PR72; unresolved blend of 5 components; ASD ref L14926
He|He I|471.31457|471.44644|0.00006|30|ASD|ASD|vac computed PR72; unresolved blend of 2 components; ASD ref L14926
He|He I|492.19313|492.33053|0.00005|20|ASD|ASD|vac from ASD wavenumber; ASD ref L14926
He|He I|501.56783|501.70773|0.00003|100|ASD|ASD|vac from ASD wavenumber; ASD ref L14926
He|He I|504.7738|504.91455||10|ASD|ASD|vac computed PR72; ASD ref L14925c72
He|He I|587.5621|587.72495||500|ASD|ASD|vac computed PR72; unresolved blend of 4 components; neighbours <0.5 nm: 587.596628(100); ASD ref L366
He|He I|667.8151|667.9995||100|ASD|ASD|vac from ASD wavenumber; ASD ref L366
He|He I|706.5190|706.7138||200|ASD|ASD|vac from ASD wavenumber; unresolved blend of 2 components; ASD ref L14925c72
He|He I|728.1349|728.3355||50|ASD|ASD|vac from ASD wavenumber; ASD ref L366
He|He I|1082.909115|1083.205748|0.000005|300|ASD|ASD|vac computed PR72; Ritz value (no observed value in ASD); neighbours <0.5 nm: 1083.033978(2000) 1083.025011(1000); ASD ref L366
He|He I|1083.025011|1083.321676|0.000005|1000|ASD|ASD|vac computed PR72; Ritz value (no observed value in ASD); neighbours <0.5 nm: 1083.033978(2000) 1082.909115(300); ASD ref L366
He|He I|1083.033978|1083.330645|0.000005|2000|ASD|ASD|vac computed PR72; Ritz value (no observed value in ASD); neighbours <0.5 nm: 1083.025011(1000); ASD ref L366
He|He I|1278.499|1278.84873||50|ASD|ASD|vac computed PR72; neighbours <0.5 nm: 1278.479(81); ASD ref L885
He|He I|1508.364|1508.77621||12|ASD|ASD|vac computed PR72; obs-Ritz -1.3 pm; ASD ref L885
He|He I|1700.247|1700.71140||200|ASD|ASD|vac computed PR72; unresolved blend of 5 components; ASD ref L885
`;
