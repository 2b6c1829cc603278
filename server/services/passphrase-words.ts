/**
 * Plain words for passphrases that are read out on the telephone and typed by hand: short, one spelling on both sides
 * of the ocean, nothing medical, no name. Our own list; its order and number matter to nobody, only that they differ.
 */
const list = `
acorn acre actor adobe agent aisle alarm album alder alley almond alpine amber anchor angle apple april apron arch
arctic arena arrow aspen atlas attic autumn avenue award axis bacon badge bagel baker balcony ballad balloon bamboo
banjo banner barge bark barley barn barrel basalt basin basket bay beach beacon bead beam bean beaver beech beetle
bell bench berry bike birch bison blanket blazer block bloom blouse board boat bolt bonnet book boot border bottle
boulder bowl box bracket braid branch brass bread breeze brick bridge brisk broom brother brown brush bubble bucket
buckle budget buffalo bugle builder bulb bundle burrow bus butter button buzzard cabin cable cactus cage cake calm
camel camera camp canal candle canoe canopy canvas canyon cape captain caramel caravan carbon card cargo carol carpet
carrot cart cashew castle cattle cave cedar celery cellar cement cereal chain chair chalk chapel chapter charm chart
cheese cherry chess chestnut chicken chime chimney chisel choir cider cinder cinema circle circus citrus city clamp
clarinet clay clerk cliff climb clock cloth cloud clover coach coast coat cobalt cocoa coconut coffee coin collar
column comet comic compass concert condor cone copper coral cord cork corner cotton couch cougar country cousin cover
cowboy crab cradle crane crate crater crayon cream creek crew cricket crisp crocus crown crumb crystal cube cuckoo cup
curb curtain curve cushion cycle cymbal cypress daisy dance dawn deck deer delta denim depot desert desk detour dial
diamond diary dinner disk ditch dock dog doll dolphin domino donkey door dough dove dragon drama draw dress drift
drill drum duck dune dust eagle earth easel east echo eclipse edge eel egg elder elk elm ember emerald empire engine
envelope errand evening exit fabric falcon family fan farm faucet feather fence fern ferry fiddle field fig filter
finch fire fish flag flame flannel flask fleet flint float flock floor flour flower flute foam fog foil folder forest
fork fossil fountain fox frame freckle freight fresh friend frog frost fruit fudge funnel gallery gallop garage garden
garlic gate gazelle gear gecko gentle geyser giant ginger giraffe glacier glade glass globe glove glow glue goat gold
golf goose gorge grain granite grape graph grass gravel green grid grill grocer grove guest guitar gulf gull gutter
habit hall hammer hammock hamster handle harp harvest hat hawk hazel heater hedge helmet hemlock herb heron herring
hickory hill hinge hive hobby holiday holly honey hood hoof hook horizon hornet horse hotel house hummus hut iceberg
icicle igloo indigo ink inlet iris iron island ivory ivy jacket jaguar jam jar jasmine jazz jeans jelly jersey jewel
jigsaw jockey journal juggle juice july jump jungle junior juniper kayak keel kennel kernel kettle key kiosk kitchen
kite kitten kiwi knight knot koala label lace ladder lady lagoon lake lamb lamp lantern larch lark laser latch laurel
lava lavender lawn layer leaf leather ledge lemon lentil leopard lesson letter lettuce lever library lichen lid light
lilac lily lime linen lion lizard llama loaf lobby lobster locket log loop lotus lumber lunar lunch lupin lynx macaw
machine magnet magpie maize mallet mammoth mango manor mantle maple marble march margin marina market marlin maroon
marsh mask mason mast match meadow medal melody melon menu mercury mesa metal meteor mill mimosa mineral mint mirror
mist mitten moat mocha model mohair monday monkey month moose morning mortar mosaic moss moth motor mountain mouse
movie muffin mule museum music mustard myrtle napkin nation nature nectar needle nephew nest nettle nickel night
noodle north notebook novel nugget number nutmeg nylon oak oar oasis oat oboe ocean octave october olive onion opal
opera orange orbit orchard orchid organ osprey ostrich otter outdoor oval oven owl oxygen oyster ozone paddle page
paint palace palm panda panel pansy panther papaya paper parade parcel park parrot parsley pasta pastel path patio
patrol pavement peach peacock peanut pearl pebble pecan pedal pelican pencil penguin pepper perch petal phone photo
piano picnic picture pier pigeon pillar pillow pilot pine pioneer pirate pistachio pitcher pizza plain planet plank
plaster plate plaza plum plume pocket poem polar polka pollen pond pony poplar poppy porch portal postcard potato
potter powder prairie present pretzel primrose prince printer prism prize pudding puffin pulley puma pumpkin puppet
puppy purple puzzle pyramid quail quarry quartz queen quiet quill quilt quince quiver quiz rabbit raccoon radar radio
radish raft rail rainbow raisin rake ranch ranger raspberry raven ravine recipe record reed reef region reindeer relay
rescue ribbon rice riddle ridge ring river road robin robot rocket rodeo roof room rooster root rope rose rotor round
rowboat royal ruby rudder rug ruler runner russet rye saddle saffron sage sail salad salmon salt sand sandal sapphire
satin saturn sauce sausage scale scallop scarf school science scooter scout screen scroll sea season seat second seed
seesaw sequoia seven shadow shallow shamrock shape shark sheep shelf shell sherbet shield ship shirt shoe shore shovel
shrub shuttle signal silk silver singer siren sister sketch ski skirt sky slate sled sleeve slipper slope snail
sneaker snow soap soccer sofa solar solid sonata sorrel soup south spade spark sparrow spatula speaker spice spider
spinach spiral spoon sport spring spruce square squash squid squirrel stable stadium staff stage stair stamp star
station statue steam steel stem step stereo stone stool stork storm story stove straw stream street string stripe
studio submarine subway sugar summer sunday sunset surf swallow swan sweater swift swing switch syrup system table
tablet tackle tailor talent tango tank tapestry target tarragon tartan tassel tavern taxi teacher teacup teal team
teapot temple ten tennis tent terrace texture thimble thistle thread thunder thyme ticket tide tiger tile timber tin
toast tomato topaz topic torch tornado tortoise totem toucan towel tower town toy track tractor trail train trapeze
travel tray treasure tree trellis tribe trolley trombone trophy trout truck truffle trumpet trunk tuba tulip tundra
tunnel turban turkey turnip turquoise turtle tweed twelve twig twin umbrella uncle uniform unison upper urban urchin
usher valley valve vanilla vase vault velvet vendor venture veranda verse vessel vest viaduct video village vine
vintage viola violet violin visitor vista voice volcano volley voyage vulture wafer waffle wagon walnut walrus waltz
warbler wasabi washer water wave wax weather wedge weekend west whale wheat wheel whistle wicker willow window winter
wisdom wizard wolf wombat wonder wood wool workshop wren writer yacht yard yarn yarrow year yeast yellow yodel yogurt
yonder yucca zebra zenith zephyr zigzag zinc zipper zone
`

export const passphraseWords: readonly string[] = list.trim().split(/\s+/)
