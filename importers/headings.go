package importers

import "tickdrawer/inventory"

// synonyms holds the headings that are recognised for each field: English,
// German, French, Spanish. To add one, write it here in lower case: case,
// accents, spaces and punctuation do not matter (so tolérance is there already),
// nor does a unit after it ("Value (nF)", "Toleranz in %"), see statedUnit. A
// heading that could name two fields belongs to neither ("Part", "Amount").
var synonyms = map[Field][]string{
	FieldKind: {
		"kind", "type", "component", "component type", "part type", "category",
		"art", "typ", "bauteil", "bauteilart", "bauteiltyp", "kategorie",
		"genre", "composant", "type de composant", "catégorie",
		"tipo", "clase", "componente", "tipo de componente", "categoría",
	},
	FieldValue: {
		"value", "val", "nominal value", "nominal", "resistance", "capacitance",
		"wert", "nennwert", "widerstandswert", "kapazität",
		"valeur", "valeur nominale", "capacité",
		"valor", "valor nominal", "resistencia", "capacidad",
	},
	FieldTolerance: {
		"tolerance", "tol", "tolerance percent", "accuracy",
		"toleranz", "genauigkeit",
		"précision",
		"tolerancia",
	},
	FieldQuantity: {
		"quantity", "qty", "count", "pieces", "pcs", "stock", "on hand", "in stock", "qty on hand", "quantity on hand", "stock quantity",
		"menge", "anzahl", "stück", "stückzahl", "stk", "bestand", "lagerbestand",
		"quantité", "qté", "nombre", "en stock",
		"cantidad", "cant", "piezas", "unidades", "existencias",
	},
	FieldBin: {
		"bin", "location", "storage", "storage location", "storage bin", "box", "drawer", "compartment", "shelf", "slot", "place",
		"fach", "lagerort", "lagerplatz", "lager", "ort", "schublade", "kiste", "box nr", "regal",
		"casier", "emplacement", "tiroir", "boîte", "rangement",
		"cajón", "ubicación", "caja", "gaveta", "estante",
	},
	FieldRatingV: {
		"rating v", "voltage", "voltage rating", "rated voltage", "max voltage", "working voltage", "vdc", "volts", "rating volt",
		"spannung", "nennspannung", "spannungsfestigkeit", "max spannung",
		"tension", "tension nominale", "tension max",
		"voltaje", "tensión nominal", "voltaje máximo",
	},
	FieldRatingW: {
		"rating w", "power", "power rating", "rated power", "wattage", "max power", "watts",
		"leistung", "nennleistung", "belastbarkeit",
		"puissance", "puissance nominale",
		"potencia", "potencia nominal",
	},
	FieldDielectric: {
		"dielectric", "dielectric material", "material", "technology", "characteristic",
		"dielektrikum", "technologie", "werkstoff",
		"diélectrique", "matériau",
		"dieléctrico", "tecnología",
	},
	FieldTempco: {
		"tempco", "tcr", "tc", "temperature coefficient", "temp coefficient", "ppm",
		"temperaturkoeffizient", "temperaturbeiwert", "tk",
		"coefficient de température",
		"coeficiente de temperatura",
	},
	FieldPackage: {
		"package", "case", "body", "footprint", "size", "package case", "case size", "case style", "mounting style",
		"bauform", "gehäuse", "baugröße", "größe",
		"boîtier", "taille",
		"encapsulado", "tamaño",
	},
	FieldUnitCost: {
		"unit cost", "cost", "price", "unit price", "price each", "cost each", "price per unit", "price per piece", "cost per piece",
		"preis", "einzelpreis", "stückpreis", "kosten", "stückkosten", "preis pro stück", "preis je stück",
		"prix", "prix unitaire", "coût", "coût unitaire",
		"precio", "precio unitario", "coste", "costo", "coste unitario", "costo unitario",
	},
	FieldPartNumber: {
		"part number", "part no", "part num", "pn", "mpn", "manufacturer part number", "manufacturer part no", "mfr part number", "mfr part no", "mfg part number", "mfg part no", "device", "model",
		"teilenummer", "bauteilnummer", "herstellernummer", "herstellerteilenummer", "typenbezeichnung", "typnummer",
		"référence fabricant", "numéro de pièce", "modèle",
		"número de pieza", "número de parte", "referencia fabricante", "referencia del fabricante", "modelo",
	},
	FieldMeasured: {
		"measured", "measured value", "measurement", "meter reading",
		"messwert", "gemessen", "gemessener wert",
		"mesuré", "valeur mesurée",
		"medido", "medida", "valor medido",
	},
	FieldNote: {
		"note", "notes", "comment", "comments", "remark", "remarks", "description",
		"bemerkung", "bemerkungen", "notiz", "notizen", "kommentar", "anmerkung", "beschreibung", "bezeichnung",
		"remarque", "remarques", "commentaire", "commentaires", "désignation",
		"nota", "notas", "comentario", "comentarios", "observaciones", "descripción",
	},
	FieldForwardV: {
		"forward v", "forward voltage", "forward drop", "vf",
		"flussspannung", "durchlassspannung", "vorwärtsspannung",
		"tension directe", "tensión directa",
	},
	FieldSaturationA: {
		"saturation a", "saturation current", "is",
		"sättigungsstrom", "sperrsättigungsstrom",
		"courant de saturation", "corriente de saturación",
	},
	FieldIdeality: {
		"ideality", "ideality factor", "emission coefficient",
		"idealitätsfaktor", "emissionskoeffizient",
		"facteur d'idéalité", "coefficient d'émission",
		"factor de idealidad", "coeficiente de emisión",
	},
	FieldSeriesOhm: {
		"series ohm", "series resistance", "rs",
		"serienwiderstand", "bahnwiderstand",
		"résistance série", "resistencia serie",
	},
}

// kindHeadings are the headings of FieldValue that say the kind as well.
var kindHeadings = map[string]inventory.Kind{
	"resistance": inventory.Resistor, "widerstandswert": inventory.Resistor, "resistencia": inventory.Resistor,
	"capacitance": inventory.Capacitor, "kapazität": inventory.Capacitor, "capacité": inventory.Capacitor, "capacidad": inventory.Capacitor,
}

// pieceWords may follow a quantity, or stand in its heading's brackets.
var pieceWords = []string{
	"pcs", "pc", "pieces", "piece", "each", "ea", "off", "x", "units", "unit",
	"stück", "stk", "st",
	"pièces", "pièce", "unités", "unité",
	"piezas", "pieza", "unidades", "unidad", "uds", "ud",
}

// totalWords begin a line that sums up those above it.
var totalWords = []string{
	"total", "grand total", "subtotal", "sub total", "sum",
	"summe", "gesamt", "gesamtsumme", "zwischensumme", "insgesamt",
	"somme", "sous-total", "total général",
	"suma", "total general",
}

// currencies are the signs and codes that may stand before or after a cost.
// Those in one line are the same money.
var currencies = [][]string{
	{"EUR", "€", "Euro"}, {"USD", "US$"}, {"$"}, {"GBP", "£"}, {"CHF", "SFr", "Fr"}, {"¥"}, {"JPY"}, {"CNY"},
	{"SEK"}, {"NOK"}, {"DKK"}, {"kr"}, {"PLN", "zł"}, {"CZK", "Kč"}, {"HUF", "Ft"}, {"RON"}, {"BGN"},
	{"CAD"}, {"AUD"}, {"NZD"}, {"INR", "₹"}, {"SGD"}, {"HKD"}, {"TWD"}, {"KRW", "₩"}, {"BRL", "R$"}, {"MXN"}, {"ZAR"},
}
