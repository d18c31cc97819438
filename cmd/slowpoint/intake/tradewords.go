package intake

import (
	"strings"
	"sync"

	"slowpoint/cmd/slowpoint/workbook"
)

// tradeWord is a place of a plan and the headings that kitchens give it: English, German, French, Polish, Spanish, Italian, parted by
// semicolons. Common practice, no source. They are compared whole, and nothing is applied before it is confirmed.
type tradeWord struct{ sheet, column, words string }

var tradeWords = []tradeWord{
	{"Products", "Product", "product;product name;recipe;recipe name;dish;menu item;item;name;soup;cut;joint;gericht;rezept;rezeptur;speise;produkt;artikel;bezeichnung;recette;plat;préparation;produit;désignation;" +
		"receptura;potrawa;danie;wyrób;nazwa;receta;plato;producto;artículo;nombre;ricetta;piatto;prodotto;articolo;nome"},
	{"Products", "Family", "family;category;section;warengruppe;kategorie;famille;catégorie;rodzina;kategoria;familia;categoría;famiglia;categoria"},
	{"Products", "Recipe version", "version;recipe version;rezeptversion;version de recette;wersja;versión;versione"},
	{"Products", "Batch", "batch no.;batch number;lot;lot no.;charge;chargennummer;partia;nr partii;lote;lotto"},
	{"Products", "Process", "process;method;route;verfahren;procédé;proces;proceso;processo"},
	{"Products", "Shape", "shape;form;forme;kształt;forma"},
	{"Products", "Thickness", "thickness;thick;depth;tray depth;fill depth;fill height;height;h;dicke;höhe;tiefe;stärke;füllhöhe;épaisseur;hauteur;profondeur;grubość;wysokość;głębokość;espesor;grosor;altura;profundidad;spessore;altezza;profondità"},
	{"Products", "Width", "width;wide;breadth;w;breite;largeur;szerokość;ancho;anchura;larghezza"},
	{"Products", "Length", "length;long;l;länge;longueur;długość;largo;longitud;lunghezza"},
	{"Products", "Diameter", "diameter;dia;dia.;ø;durchmesser;diamètre;średnica;diámetro;diametro"},
	{"Products", "Volume", "volume;batch volume;batch;volumen;objętość"},
	{"Products", "Surface area", "surface area;oberfläche;surface d’échange;powierzchnia;superficie"},
	{"Products", "Food", "food;material;base;lebensmittel;masse;aliment;surowiec;skład;alimento"},
	{"Products", "Start temperature", "start temperature;starting temperature;initial temperature;start temp;start temp.;start;from fridge;fridge;cooler;anfangstemperatur;ausgangstemperatur;starttemperatur;" +
		"température initiale;température de départ;temperatura początkowa;temperatura inicial;temperatura iniziale"},
	{"Products", "Note", "note;notes;remark;remarks;comment;comments;bemerkung;bemerkungen;remarque;remarques;uwagi;observaciones;notas;osservazioni"},
	{"Steps", "Step", "step;schritt;étape;krok;etap;paso;fase"},
	{"Steps", "Stage", "stage;stufe"},
	{"Steps", "Until slowest point reaches", "core temperature;core temp;core temp.;core to;until core;core;kerntemperatur;température à cœur;temperatura wewnętrzna;temperatura w środku;temperatura en el centro;temperatura al cuore"},
	{"Steps", "Surroundings", "surroundings;medium;umgebung;milieu"},
	{"Steps", "Air speed", "air speed;air velocity;luftgeschwindigkeit;vitesse d’air;prędkość powietrza;velocidad del aire;velocità dell’aria"},
	{"Steps", "Film coefficient", "film coefficient;heat transfer coefficient;wärmeübergangskoeffizient"},
	{"Steps", "Relative humidity", "relative humidity;humidity;rh;luftfeuchte;humidité;wilgotność;humedad;umidità"},
	{"Steps", "Equipment", "equipment;oven type;gerät;équipement;urządzenie;equipo;attrezzatura"},
	{"Steps", "Load", "load;beladung;charge du four;załadunek;carga;carico"},
	{"Foods", "Water", "water;moisture;wasser;eau;woda;agua;acqua"},
	{"Foods", "Protein", "protein;eiweiß;protéines;białko;proteínas;proteine"},
	{"Foods", "Fat", "fat;fett;matières grasses;tłuszcz;grasa;grassi"},
	{"Foods", "Carbohydrate", "carbohydrate;carbohydrates;kohlenhydrate;glucides;węglowodany;carbohidratos;carboidrati"},
	{"Foods", "Fibre", "fibre;fiber;ballaststoffe;fibres;błonnik;fibra"},
	{"Foods", "Ash", "ash;asche;cendres;popiół;cenizas;ceneri"},
}

// stageWords are what steps are called. A heading of a temperature or a duration with such a name, or under such a group, is of that step.
const stageWords = "oven;combi;cook;cooking;bake;roast;steam;steamer;steaming;boil;boiling;grill;smoker;water bath;chill;chilling;cool;cooling;blast;blast chill;blast chiller;chiller;spiral;ice bath;" +
	"rest;resting;stand;standing;hold;holding;hot hold;hot holding;store;storage;cold store;reheat;reheating;regeneration;" +
	"ofen;garen;gar;kochen;koch;backen;back;braten;dämpfen;kühlen;kühl;kühlung;abkühlen;abkühl;schockkühlen;schockkühler;ruhen;ruhe;lagern;lager;lagerung;heißhalten;regenerieren;" +
	"four;cuisson;refroidissement;cellule;repos;stockage;conservation;maintien au chaud;remise en température;" +
	"piec;pieczenie;pieczenia;gotowanie;gotowania;chłodzenie;chłodzenia;chłodziarka;chłodziarki;przechowywanie;przechowywania;podgrzewanie;podgrzewania;" +
	"horno;cocción;enfriamiento;abatidor;reposo;almacenamiento;regeneración;forno;cottura;raffreddamento;abbattitore;riposo;conservazione;rigenerazione"

// timeWords and heatWords are what stands beside the name of a step where a duration or a temperature is meant.
const (
	timeWords = "time;duration;minutes;hours;min;mins;zeit;dauer;durée;durée de;temps;temps de;temps du;czas;tiempo;tiempo de;tempo;tempo di"
	heatWords = "temperature;temp;temp.;temperatur;température;température de;température du;temperatura;temperatura de;temperatura del;temperatura di"
)

// besides are the columns of Steps that such words mean.
var besides = []struct{ column, words string }{{"Duration", timeWords}, {"Temperature", heatWords}}

// totalWords begin or end the rows that add others up.
const totalWords = "total;subtotal;sub-total;sum;summe;gesamt;zwischensumme;somme;sous-total;suma;razem;totale;somma"

// aim is a place of the plan that a heading may mean.
type aim struct {
	sheet  *workbook.Sheet
	column *workbook.Column
	part   string
	why    string
}

// tradeAims are the places that the words of the trade mean, by their keys.
var tradeAims = sync.OnceValue(func() map[string]aim {
	out := map[string]aim{}
	for _, t := range tradeWords {
		sheet := workbook.SheetNamed(t.sheet)
		for _, w := range strings.Split(t.words, ";") {
			if _, taken := out[workbook.Key(w)]; !taken {
				out[workbook.Key(w)] = aim{sheet: sheet, column: sheet.Column(t.column), why: "a word of the trade for " + t.column}
			}
		}
	}
	return out
})

// stages tells which words name a step.
var stages = sync.OnceValue(func() map[string]bool {
	out := map[string]bool{}
	for _, w := range strings.Split(stageWords, ";") {
		out[workbook.Key(w)] = true
	}
	return out
})

// stageOf finds the name of a step in a heading: alone, or beside a word for a time or a temperature, which it gives as the column.
func stageOf(name string) (stage, column string) {
	k := workbook.Key(name)
	if stages()[k] {
		return k, ""
	}
	for _, b := range besides {
		for _, w := range strings.Split(b.words, ";") {
			w = workbook.Key(w)
			for _, rest := range []string{strings.TrimPrefix(k, w+" "), strings.TrimSuffix(k, " "+w), strings.TrimSuffix(k, w)} {
				if rest != k && stages()[rest] {
					return rest, b.column
				}
			}
		}
	}
	return "", ""
}
