package configs

type event struct {
	_ struct{} `exactly:"intrude accumulate stretch erode bury change-base remove"`
	block
	Intrude    *intrude    `key:"intrude" doc:"a sheet comes in"`
	Accumulate *accumulate `key:"accumulate" doc:"a layer grows from below"`
	Stretch    *stretch    `key:"stretch" doc:"the column stretches; negative thickens"`
	Erode      *erode      `key:"erode" doc:"rock goes from the surface"`
	Bury       *bury       `key:"bury" doc:"rock comes onto the surface"`
	ChangeBase *changeBase `key:"change-base" doc:"the base's temperature or heat flow changes"`
	Remove     *removal    `key:"remove" doc:"part of a layer goes; rock of the base takes its place"`
}

type intrude struct {
	rock
	Name        text     `key:"name,required" as:"name"`
	At          quantity `key:"at,required" dim:"time"`
	Below       text     `key:"below,required" as:"name" doc:"the layer above the sheet"`
	Thickness   quantity `key:"thickness,required" dim:"length" range:"(0 m,1000 km]"`
	Temperature quantity `key:"temperature,required" dim:"temperature" range:"[0 K,5000 K]"`
	Repeat      *repeat  `key:"repeat"`
}

type repeat struct {
	block
	Times count    `key:"times,required" range:"[1,10000]"`
	Every quantity `key:"every,required" dim:"duration" range:"(0 s,5000 Myr]" eg:"0.5 Myr"`
}

type accumulate struct {
	block
	Layer       text     `key:"layer,required" as:"name"`
	From        quantity `key:"from,required" dim:"time"`
	To          quantity `key:"to,required" dim:"time"`
	Rate        quantity `key:"rate,required" dim:"velocity" range:"[0 m/s,1 m/yr]"`
	Temperature quantity `key:"temperature" dim:"temperature" range:"[0 K,5000 K]"`
}

func (e *accumulate) check(w *walker) { w.increasing(e.From, e.To, e.path) }

type stretch struct {
	block
	From quantity `key:"from,required" dim:"time"`
	To   quantity `key:"to,required" dim:"time"`
	Rate quantity `key:"rate,required" dim:"strain-rate" range:"[-1e-10 1/s,1e-10 1/s]"`
}

func (e *stretch) check(w *walker) { w.increasing(e.From, e.To, e.path) }

type erode struct {
	block
	From quantity `key:"from,required" dim:"time"`
	To   quantity `key:"to,required" dim:"time"`
	Rate quantity `key:"rate,required" dim:"velocity" range:"[0 m/s,1 m/yr]"`
}

func (e *erode) check(w *walker) { w.increasing(e.From, e.To, e.path) }

type bury struct {
	rock
	Name        text     `key:"name,required" as:"name"`
	From        quantity `key:"from,required" dim:"time"`
	To          quantity `key:"to,required" dim:"time"`
	Rate        quantity `key:"rate,required" dim:"velocity" range:"[0 m/s,1 m/yr]"`
	Temperature quantity `key:"temperature" dim:"temperature" range:"[0 K,5000 K]"`
}

func (e *bury) check(w *walker) {
	e.rock.check(w)
	w.increasing(e.From, e.To, e.path)
}

type changeBase struct {
	_ struct{} `exactly:"temperature heat-flow"`
	block
	At          quantity `key:"at,required" dim:"time"`
	Temperature quantity `key:"temperature" dim:"temperature" range:"(0 K,5000 K]"`
	HeatFlow    quantity `key:"heat-flow" dim:"heat-flow" range:"[-1 W/m2,10 W/m2]"`
}

type removal struct {
	block
	At    quantity `key:"at,required" dim:"time"`
	Layer text     `key:"layer,required" as:"name"`
	Share quantity `key:"share,required" dim:"number" range:"(0,1]"`
}
