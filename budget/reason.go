package budget

import "fmt"

// reason is why a point has no budget; the words are made when they are asked for.
type reason uint8

const (
	noReason reason = iota
	reasonRatio
	reasonResistance
	reasonOffVoltage
	reasonSwing
	reasonPlateau
	reasonReverse
	reasonImpossible
	reasonHot
	reasonNoBalance
	reasonCold
	reasonOverflow
)

var reasonOf = map[fault]reason{
	sound:          reasonResistance, // the balance never closed: the loss grows faster than the input can feed it
	noOnVoltage:    reasonResistance,
	noOffVoltage:   reasonOffVoltage,
	swingTooLarge:  reasonSwing,
	plateauAtDrive: reasonPlateau,
	currentReverse: reasonReverse,
	tooCold:        reasonCold,
	overflow:       reasonOverflow,
}

// Reason says in words why the point has no budget; "" when it settled.
func (b *Budget) Reason() string {
	switch b.reason {
	case reasonRatio:
		return fmt.Sprintf("%s: %.4g V in, %.4g V out", b.model.topology.Reach(b.Vin, b.Vout), b.Vin, b.Vout)
	case reasonResistance:
		return "the resistances in the current path leave no voltage that could carry this load; a lower resistance, a lighter load or a higher input would"
	case reasonOffVoltage:
		return "the rectifier's drop leaves no voltage to lower the inductor current"
	case reasonSwing:
		return "the flux swing is more than the inductor's saturation law can hold; a larger inductance, a higher frequency or a larger saturation current would"
	case reasonPlateau:
		return fmt.Sprintf("the drive voltage can't carry %.3g A: the plateau at this current reaches it", b.current)
	case reasonReverse:
		return "neither continuous nor discontinuous conduction balances at this load"
	case reasonImpossible:
		return fmt.Sprintf("heated by its loss, the %s leaves the range of its model (a drop or factor falls below zero)", b.Part)
	case reasonHot:
		return fmt.Sprintf("the %s settles only above %.0f °C", b.Part, hottest)
	case reasonCold:
		return fmt.Sprintf("at %.4g °C the resistance of copper is outside its model", b.Ambient)
	case reasonOverflow:
		return "even with the parts held at ambient the losses grow faster than the input can feed them; a lighter load, less resistance or less leakage would settle"
	case reasonNoBalance:
		return fmt.Sprintf("the %s heats itself faster than it can shed heat; a lower thermal resistance, a cooler ambient or a part with less loss would settle", b.Part)
	}
	return ""
}
