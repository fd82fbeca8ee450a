// Drawings that explain a field: what to measure, and from where to where.
import { make } from "./store.js";

const pictures = {
  width: ["the band's width is measured from its back to the bottom of the gullets", "0 0 320 150", `
    <path class="steel" d="M10 20H310V92L292 92L300 122L270 92L248 92L256 122L226 92L204 92L212 122L182 92L160 92L168 122L138 92L116 92L124 122L94 92L72 92L80 122L50 92L28 92L36 122L10 96Z"/>
    <path class="dim" d="M60 22V90M54 30L60 22L66 30M54 82L60 90L66 82"/><text x="70" y="62">net width: back to gullet bottom</text>
    <path class="dim dashed" d="M302 22V120M296 30L302 22L308 30M296 112L302 120L308 112"/><text class="no" x="296" y="142" text-anchor="end">not to the tooth tip (gross)</text><text x="20" y="14">back</text>`],
  gross: ["the gross width runs from the back to the tooth tip", "0 0 320 150", `
    <path class="steel" d="M10 20H310V92L292 92L300 122L270 92L248 92L256 122L226 92L204 92L212 122L182 92L160 92L168 122L138 92L116 92L124 122L94 92L72 92L80 122L50 92L28 92L36 122L10 96Z"/>
    <path class="dim" d="M302 22V120M296 30L302 22L308 30M296 112L302 120L308 112"/><text x="290" y="62" text-anchor="end">gross width: back to tooth tip</text><text x="20" y="14">back</text>`],
  thick: ["the band's thickness is measured with a micrometer at three places", "0 0 320 112", `
    <path class="steel" d="M10 50H310V64H10Z"/><path class="dim" d="M60 20V48M54 40L60 48L66 40M60 94V66M54 74L60 66L66 74"/>
    <path class="dim" d="M160 20V48M154 40L160 48L166 40M160 94V66M154 74L160 66L166 74M260 20V48M254 40L260 48L266 40M260 94V66M254 74L260 66L266 74"/><text x="70" y="30">1</text><text x="170" y="30">2</text><text x="270" y="30">3</text><text x="10" y="106">three places; write their mean</text>`],
  gauge: ["the gauge length runs from knife edge to knife edge of the two clamps", "0 0 320 130", `
    <path class="steel" d="M4 96H316V112H4Z"/><path class="part" d="M50 96L42 60H58ZM262 96L254 60H270Z"/><path class="part" d="M42 40H230V60H42ZM236 36H278V64H236Z"/><text x="240" y="30">indicator</text><text x="70" y="55" class="on-part">bar</text>
    <path class="dim" d="M50 98V126M262 98V126M50 122H262M58 117L50 122L58 127M254 117L262 122L254 127"/><text x="156" y="90" text-anchor="middle">gauge length</text>`],
  spans: ["wheel pull is the pull of both spans together", "0 0 320 150", `
    <circle class="part" cx="56" cy="75" r="46"/><circle class="part" cx="264" cy="75" r="46"/><path class="dim" d="M56 29H264M56 121H264"/>
    <path class="dim" d="M130 29H96M104 23L96 29L104 35M130 121H96M104 115L96 121L104 127"/><text x="150" y="24">span 1: half of the pull</text><text x="150" y="142">span 2: half of the pull</text>
    <path class="dim" d="M300 75H318M311 69L318 75L311 81"/><text x="264" y="80" text-anchor="middle" class="on-part">wheel pull</text>`],
  bore: ["the bore is the inside diameter of one cylinder", "0 0 320 120", `
    <path class="part" d="M40 14H240V26H40ZM40 94H240V106H40ZM28 14H40V106H28Z"/><path class="steel" d="M150 26H170V94H150ZM170 52H310V68H170Z"/>
    <path class="dim" d="M100 28V92M94 36L100 28L106 36M94 84L100 92L106 84"/><text x="108" y="64">bore</text><text x="190" y="45">rod to the wheel</text>`],
};

export function drawing(name) {
  const [says, box, inside] = pictures[name];
  const svg = new DOMParser().parseFromString(`<svg xmlns="http://www.w3.org/2000/svg" viewBox="${box}" class="drawing" role="img" aria-label="${says}">${inside}</svg>`, "image/svg+xml").documentElement;
  return make("figure", { class: "drawn" }, document.importNode(svg, true));
}
