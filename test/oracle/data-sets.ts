/** Two groups of a data set that R carries, as R code. */
export interface DataSetPair {
  readonly name: string;
  readonly first: string;
  readonly second: string;
}

/** From R's `datasets` package; 22 comparisons on 16 data sets, 10 to 530 values a side, with and without ties. */
export const DATA_SET_PAIRS: readonly DataSetPair[] = [
  {
    name: "sleep$extra, group 1 and 2",
    first: "sleep$extra[sleep$group==1]",
    second: "sleep$extra[sleep$group==2]",
  },
  {
    name: "ToothGrowth$len, OJ and VC",
    first: "ToothGrowth$len[ToothGrowth$supp=='OJ']",
    second: "ToothGrowth$len[ToothGrowth$supp=='VC']",
  },
  {
    name: "airquality$Ozone, May and August",
    first: "na.omit(airquality$Ozone[airquality$Month==5])",
    second: "na.omit(airquality$Ozone[airquality$Month==8])",
  },
  {
    name: "airquality$Wind, May and September",
    first: "airquality$Wind[airquality$Month==5]",
    second: "airquality$Wind[airquality$Month==9]",
  },
  {
    name: "airquality$Temp, May and July",
    first: "airquality$Temp[airquality$Month==5]",
    second: "airquality$Temp[airquality$Month==7]",
  },
  {
    name: "faithful$eruptions, halves",
    first: "faithful$eruptions[1:136]",
    second: "faithful$eruptions[137:272]",
  },
  {
    name: "faithful$waiting, short and long eruptions",
    first: "faithful$waiting[faithful$eruptions<3]",
    second: "faithful$waiting[faithful$eruptions>=3]",
  },
  { name: "quakes$mag, halves", first: "quakes$mag[1:500]", second: "quakes$mag[501:1000]" },
  {
    name: "quakes$depth, south and north of 20° S",
    first: "quakes$depth[quakes$lat<=-20]",
    second: "quakes$depth[quakes$lat>-20]",
  },
  { name: "rivers, halves", first: "rivers[1:70]", second: "rivers[71:141]" },
  {
    name: "ChickWeight on day 21, diet 1 and 3",
    first: "ChickWeight$weight[ChickWeight$Time==21 & ChickWeight$Diet==1]",
    second: "ChickWeight$weight[ChickWeight$Time==21 & ChickWeight$Diet==3]",
  },
  {
    name: "ChickWeight, diet 1 and 4",
    first: "ChickWeight$weight[ChickWeight$Diet==1]",
    second: "ChickWeight$weight[ChickWeight$Diet==4]",
  },
  {
    name: "iris$Sepal.Length, setosa and versicolor",
    first: "iris$Sepal.Length[iris$Species=='setosa']",
    second: "iris$Sepal.Length[iris$Species=='versicolor']",
  },
  {
    name: "PlantGrowth$weight, ctrl and trt1",
    first: "PlantGrowth$weight[PlantGrowth$group=='ctrl']",
    second: "PlantGrowth$weight[PlantGrowth$group=='trt1']",
  },
  {
    name: "PlantGrowth$weight, trt1 and trt2",
    first: "PlantGrowth$weight[PlantGrowth$group=='trt1']",
    second: "PlantGrowth$weight[PlantGrowth$group=='trt2']",
  },
  {
    name: "chickwts$weight, casein and horsebean",
    first: "chickwts$weight[chickwts$feed=='casein']",
    second: "chickwts$weight[chickwts$feed=='horsebean']",
  },
  {
    name: "InsectSprays$count, A and C",
    first: "InsectSprays$count[InsectSprays$spray=='A']",
    second: "InsectSprays$count[InsectSprays$spray=='C']",
  },
  { name: "precip, halves", first: "precip[1:35]", second: "precip[36:70]" },
  { name: "Nile, to 1898 and after", first: "Nile[1:28]", second: "Nile[29:100]" },
  { name: "lynx, halves", first: "lynx[1:57]", second: "lynx[58:114]" },
  { name: "women, height and half the weight", first: "women$height", second: "women$weight/2" },
  {
    name: "warpbreaks$breaks, wool A and B",
    first: "warpbreaks$breaks[warpbreaks$wool=='A']",
    second: "warpbreaks$breaks[warpbreaks$wool=='B']",
  },
];
